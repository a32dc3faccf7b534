/** `npm start`: the real thing. No demo data, no default password; the first visit makes the administrator with a code printed here. */
import { loadConfig } from '../config';
import { beginBuild, consoleLog, openData, runUntilStopped } from './launch';

await runUntilStopped(async (closers) => {
  const config = loadConfig(process.env);
  const log = consoleLog(config.logLevel);
  const built = beginBuild();
  const open = await openData(config);
  closers.add(() => open.close());
  if (await built) log.info('client built');
  const { createTautbook } = await import('../app');
  const book = await createTautbook({ config, open, log });
  closers.add(() => book.close());
  const { url } = await book.listen();
  console.log(`Tautbook is open at ${url}`);
  const code = await book.setupCode();
  if (code !== null) console.log(`\nThere is no administrator yet. Open ${url}/setup and use this one-time code: ${code}\n`);
  console.log('A research record, not a medical device and not a safety system. Ctrl-C stops it.');
});
