/** The client's bundle: built when it is missing or older than its sources, left alone otherwise. */
import { spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { StartRefusal } from '../start-refusal';

const readOnlyCodes = new Set(['EACCES', 'EROFS', 'EPERM']);

const codeOf = (error: unknown) => (error as NodeJS.ErrnoException).code ?? '';

const sources = ['client', 'shared', 'vite.config.ts', 'package-lock.json'];

function filesUnder(path: string): string[] {
  if (!statSync(path).isDirectory()) return [path];
  return readdirSync(path, { recursive: true, encoding: 'utf8' }).map((name) => join(path, name)).filter((file) => statSync(file).isFile());
}

/** Digest of the sources' contents: a copied or freshly cloned tree with the same text counts as the same. */
function sourceDigest(root: string): string {
  const hash = createHash('sha256');
  for (const file of sources.flatMap((source) => filesUnder(join(root, source))).sort()) {
    hash.update(file.slice(root.length));
    hash.update(readFileSync(file));
  }
  return hash.digest('hex');
}

/**
 * Builds in a process of its own: the bundle is the same whatever the environment of this one is, and the start goes on
 * beside it. It is built beside the old one and moved in whole, so that servers that start together, and one that is
 * running, are never without pages.
 *
 * @returns whether it had to be built
 * @throws StartRefusal BUILD_READ_ONLY
 */
export async function buildClientIfStale(root: string): Promise<boolean> {
  const dist = join(root, 'dist');
  const client = join(dist, 'client');
  const stampFile = join(dist, 'client-sources');
  const digest = sourceDigest(root);
  const fresh = existsSync(join(client, 'index.html')) && existsSync(stampFile) && readFileSync(stampFile, 'utf8') === digest;
  if (fresh) return false;
  const made = join(dist, `client-${process.pid}-${Date.now()}`);
  const clear = () => rmSync(made, { recursive: true, force: true });
  process.once('exit', clear); // stopped meanwhile
  try {
    mkdirSync(dist, { recursive: true });
    writeFileSync(stampFile, ''); // whatever happens from here on, what lies there is not known to be fresh
    await runBundler(root, made);
    moveIn(made, client);
    writeFileSync(stampFile, digest);
  } catch (error) {
    if (!readOnlyCodes.has(codeOf(error))) throw error;
    throw new StartRefusal('BUILD_READ_ONLY', `The pages have to be built, but ${dist} cannot be written.`, 'Run npm run demo or npm start once as a user who may write there.', { cause: error });
  } finally {
    process.off('exit', clear);
    clear();
  }
  return true;
}

/** Puts a directory in the place of another, which may be there, and may come and go while others do the same. */
function moveIn(made: string, place: string): void {
  for (let n = 0; ; n += 1) {
    const old = `${made}-old-${n}`;
    try {
      if (existsSync(place)) renameSync(place, old);
      renameSync(made, place);
      return;
    } catch (error) {
      if (!['ENOTEMPTY', 'EEXIST', 'ENOENT'].includes(codeOf(error)) || !existsSync(made)) throw error;
    } finally {
      rmSync(old, { recursive: true, force: true });
    }
  }
}

function runBundler(root: string, outDir: string): Promise<void> {
  const vite = join(dirname(createRequire(import.meta.url).resolve('vite/package.json')), 'bin', 'vite.js');
  const args = ['build', '--config', join(root, 'vite.config.ts'), '--outDir', outDir, '--emptyOutDir', '--bypass-lock', '--logLevel', 'warn'];
  const child = spawn(process.execPath, [vite, ...args], { cwd: root, stdio: ['ignore', 'ignore', 'pipe'], env: { ...process.env, NODE_ENV: 'production' } });
  const end = () => void child.kill();
  process.once('exit', end);
  let complaints = '';
  child.stderr.setEncoding('utf8').on('data', (text: string) => { complaints += text; });
  return new Promise((resolve, reject) => {
    child.once('error', reject);
    child.once('close', (status) => {
      process.off('exit', end);
      if (status === 0) resolve();
      else reject(new Error(`The pages could not be built.\n${complaints}`));
    });
  });
}
