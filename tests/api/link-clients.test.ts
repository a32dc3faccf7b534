/** The sample client in TypeScript and the byte-exact examples that every client can be held to. */
import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { decodeDeviceMessage, decodeServerMessage, encodeDeviceMessage, encodeServerMessage } from '@shared/link';
import { makeMiniLab, startApp, type MiniLab, type TestApp } from '../support/app';
import { recordsAsArmed } from '../support/lab-clients';

let app: TestApp;
let lab: MiniLab;
beforeAll(async () => {
  app = await startApp();
  lab = await makeMiniLab(app);
});
afterAll(() => app.close());

test('the TypeScript client records an armed trial over a line that breaks once: every sample once, the gap as a gap', () => recordsAsArmed(app, lab, [process.execPath, '--import', 'tsx', 'samples/link/client.ts']));

interface Example { name: string; from: 'device' | 'server'; message: unknown; hex: string }
const { frames } = JSON.parse(readFileSync(new URL('../../samples/link/examples.json', import.meta.url), 'utf8')) as { frames: Example[] };

/** Byte blocks as the examples write them. */
function plain(value: unknown): unknown {
  if (value instanceof Uint8Array) return { hex: Buffer.from(value).toString('hex') };
  if (Array.isArray(value)) return value.map(plain);
  if (typeof value === 'object' && value !== null) return Object.fromEntries(Object.entries(value).filter(([, part]) => part !== undefined).map(([name, part]) => [name, plain(part)]));
  return value;
}

test.each(frames.map((example) => [example.name, example] as const))('the example %s is read as it says and written byte for byte', (_name, { from, message, hex }) => {
  const bytes = Uint8Array.from(Buffer.from(hex, 'hex'));
  const decoded = from === 'device' ? decodeDeviceMessage(bytes) : decodeServerMessage(bytes);
  if (!decoded.ok) throw new Error(decoded.problem);
  expect(plain(decoded.message)).toEqual(message);
  const again = from === 'device' ? encodeDeviceMessage(decoded.message as Parameters<typeof encodeDeviceMessage>[0]) : encodeServerMessage(decoded.message as Parameters<typeof encodeServerMessage>[0]);
  expect(Buffer.from(again).toString('hex')).toBe(hex);
});
