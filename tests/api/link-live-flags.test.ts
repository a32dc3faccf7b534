/** What the people in the room see while a trial runs is what the book holds afterwards: the same flags, found twice. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import WebSocket from 'ws';
import { unpack } from 'msgpackr';
import { type LiveFromServer, liveFromServer, liveSamples } from '@shared/api/live';
import type { JudgedFlag } from '@shared/api/sessions';
import { channelNames } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { ruleRevisions } from '@server/db/schema';
import { createSimulatedDevice, simulateRun, type RunOptions, type Upsets } from '@server/simulator';
import { heronFile, makeMiniLab, type MiniLab, startApp, type TestApp } from '../support/app';
import type { HttpClient } from '../support/http-client';

type Of<T extends LiveFromServer['type']> = Extract<LiveFromServer, { type: T }>;

let app: TestApp;
let lab: MiniLab;
let operator: HttpClient;
beforeAll(async () => {
  app = await startApp();
  lab = await makeMiniLab(app);
  operator = await app.signedIn(lab.people.operator);
});
afterAll(() => app.close());

/** A person with a trial's page open. */
async function viewer(trial: string): Promise<{ heard: LiveFromServer[]; samples: { timesS: Float64Array }[]; next<T extends LiveFromServer['type']>(type: T, fits?: (message: Of<T>) => boolean): Promise<Of<T>>; leave(): void }> {
  const socket = new WebSocket(`${app.url.replace('http', 'ws')}/live/v1`, { headers: { cookie: operator.cookie, origin: app.url } });
  const heard: LiveFromServer[] = [];
  const samples: { timesS: Float64Array }[] = [];
  const looks = new Set<() => void>();
  socket.on('message', (data: Buffer, isBinary) => {
    if (isBinary) samples.push({ timesS: new Float64Array(Uint8Array.from(liveSamples.parse(unpack(data)).timesS).buffer) });
    else heard.push(liveFromServer.parse(JSON.parse(data.toString())));
    for (const look of looks) look();
  });
  const next = <T extends LiveFromServer['type']>(type: T, fits: (message: Of<T>) => boolean = () => true): Promise<Of<T>> => new Promise((resolve) => {
    const look = (): void => {
      const found = heard.find((message): message is Of<T> => message.type === type && fits(message as Of<T>));
      if (found === undefined) return;
      looks.delete(look);
      resolve(found);
    };
    looks.add(look);
    look();
  });
  socket.once('open', () => socket.send(JSON.stringify({ type: 'join', room: `trial:${trial}` })));
  await next('joined');
  return { heard, samples, next, leave: () => socket.terminate() };
}

async function recorded(i: number, run: Partial<RunOptions>, upsets: Upsets) {
  const trial = lab.trialIds[i] as string;
  const watching = await viewer(trial);
  const device = createSimulatedDevice({
    url: app.url, key: lab.deviceKey, rig: { code: 'heron-8', revision: 1 }, channels: channelNames(8), humanDelayMs: [1, 2], reconnectMs: [10, 50], speed: 5, seed: 20 + i, upsets,
    source: () => simulateRun({ rig: parseRig(heronFile), task: 'pick-and-place', seed: 7 + i, durationS: 20, chunkSamples: 20, ...run }),
  });
  // The link may break before the welcome: a device that starts has to try again itself.
  while (device.state === 'idle') await device.connect().catch(() => undefined);
  // It may also be down just when the trial is armed: that is refused, and the operator tries again.
  await expect.poll(async () => (await operator.post(`/api/trials/${trial}/arm`, { deviceId: lab.deviceId })).status).toBe(200);
  await watching.next('trial', ({ state }) => state === 'stopped');
  await watching.next('found');
  const { body } = await operator.get<{ flags: JudgedFlag[] }>(`/api/trials/${trial}/flags`);
  await device.close();
  watching.leave();
  return { device, watching, stored: body.flags };
}

const told = (flags: readonly { kind: string; cable: number | null; startS: number; endS: number; peak: number | null }[]) =>
  flags.map(({ kind, cable, startS, endS, peak }) => ({ kind, cable, startS, endS, peak })).sort((a, b) => a.startS - b.startS || a.kind.localeCompare(b.kind) || (a.cable ?? 0) - (b.cable ?? 0));

const everything: RunOptions['troubles'] = [
  { kind: 'slack', cable: 3 }, { kind: 'saturation' }, { kind: 'oscillation' }, { kind: 'gap' }, { kind: 'slip', atS: 17 }, { kind: 'pretension' },
];

describe('flags of a running trial', () => {
  it('are those of the book afterwards, over a link that loses, repeats and breaks', { timeout: 240_000 }, async () => {
    const { device, watching, stored } = await recorded(0, { troubles: everything }, { lose: 0.03, repeat: 0.03, breakEveryS: 0.8 });
    expect(device.report().connections).toBeGreaterThan(1);
    const last = watching.heard.findLast((message) => message.type === 'flags');
    expect(last?.flags.every(({ open }) => !open)).toBe(true);
    expect(told(last?.flags ?? [])).toEqual(told(stored));
    expect([...new Set(stored.map(({ kind }) => kind))].sort()).toEqual(['gap', 'oscillation', 'saturation', 'slack', 'slip']);
    // They were told while they went on, not only at the end.
    expect(watching.heard.some((message) => message.type === 'flags' && message.flags.some(({ open }) => open))).toBe(true);
  });

  it('follow the rules of the study where it has its own', { timeout: 240_000 }, async () => {
    await app.open.db.insert(ruleRevisions).values({ studyId: lab.study.id, revision: 2, rules: { format: 'tautbook.rules/1', slack: { onsetN: 2.5, releaseN: 2.8, minDurationS: 0.02, mergeGapS: 0 }, oscillation: null, slip: null, saturation: null } });
    const { watching, stored } = await recorded(1, { troubles: everything }, {});
    expect(told(watching.heard.findLast((message) => message.type === 'flags')?.flags ?? [])).toEqual(told(stored));
    expect([...new Set(stored.map(({ kind }) => kind))].sort()).toEqual(['gap', 'slack']);
    // Above the default threshold of 0.5 N: these are slack by the study's rules alone.
    expect(stored.some(({ kind, peak }) => kind === 'slack' && peak !== null && peak > 0.5)).toBe(true);
  });
});

it('sends a viewer samples in order, about 250 a second of the trial, the newest within the last frame', { timeout: 240_000 }, async () => {
  const { watching } = await recorded(2, { troubles: [], durationS: 10 }, {});
  const times = watching.samples.flatMap(({ timesS }) => [...timesS]);
  expect(times.every((at, i) => i === 0 || at > (times[i - 1] as number))).toBe(true);
  expect(times.length).toBeGreaterThan(2000);
  expect(times.length).toBeLessThanOrEqual(2500);
  expect(times.at(-1)).toBeGreaterThan(9.9);
});
