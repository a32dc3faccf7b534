/**
 * `npm run demo`: a fictional lab on an embedded database, with one simulated device on the real device link.
 *
 * The lab is made at the first start, deterministically; later starts find it. The device is a process of its own, as a
 * real one would be.
 */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { join } from 'node:path';
import { loadConfig } from '../config';
import type { DemoDevice } from '../db/seed';
import { beginBuild, type Closers, consoleLog, openData, root, runUntilStopped } from './launch';

function startDevice(url: string, device: DemoDevice, closers: Closers): void {
  const args = [
    '--import', 'tsx', join(root, 'server/cli/device.ts'),
    '--url', url.replace(/^http/, 'ws'), '--key', device.key, '--rig', device.rigFile, '--revision', String(device.revision), '--quiet',
  ];
  // The channel between them tells the device when this process is gone, however it went.
  const child = spawn(process.execPath, args, { cwd: root, stdio: ['ignore', 'ignore', 'inherit', 'ipc'] });
  let stopping = false;
  child.once('exit', (code) => {
    if (!stopping) console.error(`The simulated device ended (status ${code ?? 'unknown'}). The pages work on; start it again with: npm run device -- --help`);
  });
  closers.add(async () => {
    stopping = true;
    if (child.exitCode !== null) return;
    const ended = once(child, 'exit');
    child.kill('SIGTERM');
    await ended;
  });
}

await runUntilStopped(async (closers) => {
  // Whatever a real server is set to here, the demo stays on this machine and in a directory of its own.
  const config = loadConfig({ DATA_DIR: '.data/demo', LOG_LEVEL: 'warn', ...process.env, HOST: '127.0.0.1', DATABASE_URL: '' });
  const log = consoleLog(config.logLevel);
  const built = beginBuild();
  const open = await openData(config);
  closers.add(() => open.close());
  const { seedDemoLab } = await import('../db/seed');
  const lab = await seedDemoLab(open, { log, onProgress: (what) => console.log(what) });
  if (await built) console.log('Client built.');
  const { createTautbook } = await import('../app');
  const book = await createTautbook({ config, open, log, demo: lab.signIns });
  closers.add(() => book.close());
  const { url } = await book.listen();
  startDevice(url, lab.device, closers);
  const width = Math.max(...lab.signIns.map(({ email }) => email.length));
  console.log(`\nThe demo lab is open at ${url}\n`);
  for (const { role, email, password } of lab.signIns) console.log(`  ${role.padEnd(14)} ${email.padEnd(width)}  ${password}`);
  console.log(`\nA made-up lab with made-up people. ${lab.device.name} is connected: arm a trial of an open session to see it stream.`);
  console.log('A research record, not a medical device and not a safety system. Ctrl-C stops everything.');
});
