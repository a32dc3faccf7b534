/** The client's bundle: built when it is missing or older than its sources, left alone otherwise. */
import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

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

/** @returns whether it had to be built */
export async function buildClientIfStale(root: string): Promise<boolean> {
  const stampFile = join(root, 'dist', 'client-sources');
  const digest = sourceDigest(root);
  const fresh = existsSync(join(root, 'dist', 'client', 'index.html')) && existsSync(stampFile) && readFileSync(stampFile, 'utf8') === digest;
  if (fresh) return false;
  // Loaded here alone, so that a start with a fresh bundle does not pay for the bundler.
  const { build } = await import('vite');
  await build({ root: join(root, 'client'), configFile: join(root, 'vite.config.ts'), logLevel: 'warn' });
  writeFileSync(stampFile, digest);
  return true;
}
