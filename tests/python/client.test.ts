/** The sample client in Python, with Debian's msgpack and websockets, is a peer of its own: another language, other libraries. */
import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { makeMiniLab, startApp, type MiniLab, type TestApp } from '../support/app';
import { recordsAsArmed } from '../support/lab-clients';

const python = '/usr/bin/python3';
const there = spawnSync(python, ['-c', 'import msgpack, websockets']).status === 0;
const required = process.env['TAUTBOOK_PYTHON_REQUIRED'] === '1';
if (!there && !required) process.stdout.write('python3 with msgpack and websockets is not there: the Python client is not tested here.\n');

describe.runIf(there || required)('the Python client', () => {
  let app: TestApp;
  let lab: MiniLab;
  beforeAll(async () => {
    app = await startApp();
    lab = await makeMiniLab(app);
  });
  afterAll(() => app.close());

  test('records an armed trial over a line that breaks once: every sample once, the gap as a gap', () => recordsAsArmed(app, lab, [python, 'samples/link/client.py']));

  test('its library reads and writes the byte-exact examples', () => {
    const script = `
import json, sys, msgpack
def plain(value):
    if isinstance(value, (bytes, bytearray)): return {"hex": value.hex()}
    if isinstance(value, dict): return {k: plain(v) for k, v in value.items()}
    if isinstance(value, list): return [plain(v) for v in value]
    return value
def packed(value):
    if isinstance(value, dict) and set(value) == {"hex"}: return bytes.fromhex(value["hex"])
    if isinstance(value, dict): return {k: packed(v) for k, v in value.items()}
    if isinstance(value, list): return [packed(v) for v in value]
    return value
frames = json.load(sys.stdin)["frames"]
wrong = [f["name"] for f in frames if plain(msgpack.unpackb(bytes.fromhex(f["hex"]))) != f["message"]]
again = [f["name"] for f in frames if plain(msgpack.unpackb(msgpack.packb(packed(f["message"])))) != f["message"]]
print(json.dumps({"frames": len(frames), "wrong": wrong, "again": again}))`;
    const examples = readFileSync(new URL('../../samples/link/examples.json', import.meta.url));
    const { status, stdout, stderr } = spawnSync(python, ['-c', script], { input: examples });
    expect({ status, stderr: stderr.toString() }).toEqual({ status: 0, stderr: '' });
    const { frames } = JSON.parse(examples.toString()) as { frames: unknown[] };
    expect(JSON.parse(stdout.toString())).toEqual({ frames: frames.length, wrong: [], again: [] });
  });
});
