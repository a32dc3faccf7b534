/** The built client: hashed assets for ever, the page itself never from a cache, and every other address is the page. */
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import express, { type Express } from 'express';

const yearMs = 365 * 24 * 3600 * 1000;

/** @param directory absolute path of the built client; may appear after the start */
export function serveClient(app: Express, directory: string): void {
  const page = join(directory, 'index.html');
  app.use('/assets', express.static(join(directory, 'assets'), { immutable: true, maxAge: yearMs, fallthrough: false, index: false }));
  app.use(express.static(directory, { index: false, maxAge: 0 }));
  app.get('/{*path}', (_req, res) => {
    if (!existsSync(page)) {
      res.status(503).type('text/plain').send('The pages are not built yet. Run: npm run build');
      return;
    }
    res.set('Cache-Control', 'no-cache').sendFile(page);
  });
}
