/**
 * A whole Tautbook in a process of its own, on an embedded database on disk as `npm start` has it, for tests that kill it.
 *
 * Environment as of the server, and LAB_DEVICES. At its first start it makes a small lab. Once it listens it prints one
 * line of JSON: where it is and what is in the lab.
 */
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pino } from 'pino';
import { createTautbook } from '@server/app';
import { loadConfig } from '@server/config';
import { openDatabase } from '@server/db/engine';
import { makeMiniLab, testPassword, type TestApp } from './app';
import type { ProcessLab } from './link-house';

const config = loadConfig(process.env);
const open = await openDatabase({ dataDir: config.dataDir, databaseUrl: config.databaseUrl });
await open.migrate();
const book = await createTautbook({ config, open, log: pino({ level: config.logLevel }, pino.destination(2)) });
const { url } = await book.listen();
const file = join(config.dataDir, 'lab.json');
if (!existsSync(file)) writeFileSync(file, JSON.stringify(await makeLab()));
process.stdout.write(`${JSON.stringify({ url, lab: JSON.parse(readFileSync(file, 'utf8')) as ProcessLab })}\n`);

process.once('SIGTERM', () => {
  void book.close().then(() => open.close()).then(() => process.exit(0));
});

async function makeLab(): Promise<ProcessLab> {
  const person: TestApp['person'] = (role, name) => book.services.people.makePerson({ role, name, email: `${name}@lab.example`, password: testPassword });
  const lab = await makeMiniLab({ book, person } as TestApp);
  const devices = [{ id: lab.deviceId, key: lab.deviceKey }];
  while (devices.length < Number(process.env['LAB_DEVICES'] ?? 1)) {
    const { device, key } = await book.services.devices.register(`bench ${devices.length + 1}`, lab.rig.rigId);
    devices.push({ id: device.id, key });
  }
  return { devices, operator: lab.people.operator.email, trialIds: lab.trialIds };
}
