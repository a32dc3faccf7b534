/** The client's bundle: built when it is missing or older than its sources, left alone otherwise. */
import { spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { StartRefusal } from '../start-refusal';

const readOnlyCodes = new Set(['EACCES', 'EROFS', 'EPERM']);

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
 * beside it.
 *
 * @returns whether it had to be built
 * @throws StartRefusal BUILD_READ_ONLY
 */
export async function buildClientIfStale(root: string): Promise<boolean> {
  const dist = join(root, 'dist');
  const stampFile = join(dist, 'client-sources');
  const digest = sourceDigest(root);
  const fresh = existsSync(join(dist, 'client', 'index.html')) && existsSync(stampFile) && readFileSync(stampFile, 'utf8') === digest;
  if (fresh) return false;
  try {
    mkdirSync(dist, { recursive: true });
    writeFileSync(stampFile, ''); // a build that is broken off must not look like the one before it
    await runBundler(root);
    writeFileSync(stampFile, digest);
  } catch (error) {
    if (!readOnlyCodes.has((error as NodeJS.ErrnoException).code ?? '')) throw error;
    throw new StartRefusal('BUILD_READ_ONLY', `The pages have to be built, but ${dist} cannot be written.`, 'Run npm run demo or npm start once as a user who may write there.', { cause: error });
  }
  return true;
}

function runBundler(root: string): Promise<void> {
  const vite = join(dirname(createRequire(import.meta.url).resolve('vite/package.json')), 'bin', 'vite.js');
  const child = spawn(process.execPath, [vite, 'build', '--config', join(root, 'vite.config.ts'), '--logLevel', 'warn'], {
    cwd: root, stdio: ['ignore', 'ignore', 'pipe'], env: { ...process.env, NODE_ENV: 'production' },
  });
  let complaints = '';
  child.stderr.setEncoding('utf8').on('data', (text: string) => { complaints += text; });
  return new Promise((resolve, reject) => {
    child.once('error', reject);
    child.once('close', (status) => (status === 0 ? resolve() : reject(new Error(`The pages could not be built.\n${complaints}`))));
  });
}
