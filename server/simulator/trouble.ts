/** Scripted trouble: what goes wrong in a run, when, and how it is asked for. */
import type { Random } from './random';

export const troubleKinds = {
  slack: 'one cable’s tension dips below slack',
  pretension: 'the pretension of all cables falls until the loosest hangs slack',
  saturation: 'the hand pushes beyond what the tension limits allow',
  'near-limit': 'the hand pushes until a cable carries nine tenths of its limit',
  slip: 'one cable’s length reading steps and stays',
  oscillation: 'the rig shakes at 25 to 40 Hz',
  gap: 'samples are lost on the device',
  'cable-off': 'one cable comes off for the rest of the run',
} as const;

export type TroubleKind = keyof typeof troubleKinds;

/** What is left out is chosen by the seed. Cables are numbered from 1. */
export type TroubleWish = { kind: TroubleKind; atS?: number; durationS?: number; cable?: number };

export type Trouble = { kind: TroubleKind; atS: number; durationS: number; cable: number };

/** Usual length of each, s: [shortest, longest]. */
const lengths: Record<TroubleKind, readonly [number, number]> = {
  slack: [0.12, 0.4],
  pretension: [0.4, 0.9],
  saturation: [0.35, 0.7],
  'near-limit': [0.4, 0.8],
  slip: [0, 0],
  oscillation: [0.45, 0.9],
  gap: [0.08, 0.25],
  'cable-off': [0, 0],
};

/** Trouble that lasts until the run ends. */
const lasting = (kind: TroubleKind): boolean => kind === 'slip' || kind === 'cable-off';

/**
 * Wishes with times and cables filled in: each in a slot of its own, so that none hides another, lasting ones last.
 *
 * @throws RangeError when a wish lies outside the run or names a cable that the rig does not have
 */
export function scheduleTroubles(wishes: readonly TroubleWish[], durationS: number, cableCount: number, random: Random): Trouble[] {
  for (const wish of wishes) {
    if (wish.cable !== undefined && !(Number.isInteger(wish.cable) && wish.cable >= 1 && wish.cable <= cableCount)) {
      throw new RangeError(`${wish.kind}: the rig has no cable ${wish.cable}; its cables are 1 to ${cableCount}.`);
    }
    if (wish.atS !== undefined && !(wish.atS >= 0 && wish.atS < durationS)) {
      throw new RangeError(`${wish.kind}: ${wish.atS} s is not within the run of ${durationS} s.`);
    }
  }
  const free = shuffled(wishes.filter(({ atS, kind }) => atS === undefined && !lasting(kind)), random);
  const last = wishes.filter(({ atS, kind }) => atS === undefined && lasting(kind));
  const [from, to] = [0.06 * durationS, 0.94 * durationS];
  const slot = (to - from) / Math.max(1, free.length + last.length);
  const placed = new Map([...free, ...last].map((wish, i) => [wish, from + slot * (i + random.between(0.1, 0.45))]));
  return wishes
    .map((wish): Trouble => {
      const atS = wish.atS ?? (placed.get(wish) as number);
      const [short, long] = lengths[wish.kind];
      const room = lasting(wish.kind) ? durationS - atS : Math.min(wish.durationS ?? random.between(short, long), durationS - atS);
      return { kind: wish.kind, atS, durationS: room, cable: wish.cable ?? 1 + Math.floor(random.uniform() * cableCount) };
    })
    .sort((a, b) => a.atS - b.atS);
}

function shuffled<T>(items: T[], random: Random): T[] {
  return items.map((item) => ({ item, key: random.uniform() })).sort((a, b) => a.key - b.key).map(({ item }) => item);
}

/**
 * Reads a wish as it is written on the command line: `slack`, `slack@12.5`, `slip@20:cable=3`, `gap:duration=0.4`.
 *
 * @returns the wish, or a sentence that says what is wrong
 */
export function parseTrouble(text: string): TroubleWish | string {
  const match = /^([a-z-]+)(?:@([0-9.]+))?((?::[a-z]+=[0-9.]+)*)$/.exec(text);
  if (!match) return `“${text}” is not a trouble; write one like slack, slack@12.5 or slip@20:cable=3.`;
  const [, kind, at, rest] = match as unknown as [string, string, string | undefined, string];
  if (!(kind in troubleKinds)) return `There is no trouble “${kind}”; there are ${Object.keys(troubleKinds).join(', ')}.`;
  const wish: TroubleWish = { kind: kind as TroubleKind };
  if (at !== undefined) wish.atS = Number(at);
  for (const pair of rest.split(':').filter((part) => part !== '')) {
    const [name, value] = pair.split('=') as [string, string];
    if (name === 'cable') wish.cable = Number(value);
    else if (name === 'duration') wish.durationS = Number(value);
    else return `“${name}” in “${text}” is not known; a trouble takes cable and duration.`;
  }
  if ([wish.atS, wish.cable, wish.durationS].some(Number.isNaN)) return `“${text}” holds something that is not a number.`;
  return wish;
}
