/** From hand and wrench to the samples of a recording: tensions, lengths, readings, chunks. SI units, base axes. */
import type { Chunk } from '@shared/recording';
import { cableLengths, cableStretch, type Vec3 } from '@shared/rig';
import { OpenChunk } from './open-chunk';
import { restingHand, turned, type HandState } from './motion';
import { noNoise, steps, usualNoise, type Noise, type Sensors } from './readings';
import { wrenchChannels, type RunOptions } from './simulate-run';
import type { Statics } from './statics';
import type { TroubleEffect } from './trouble-effects';
import { TensionWatch, type Truth } from './truth';

export class Sampling {
  readonly #noise: Noise;
  readonly #watch: TensionWatch;
  readonly #hand: HandState;
  readonly #wrench = new Float64Array(7);
  readonly #command: Float64Array;
  readonly #carried: Float64Array;
  readonly #lengths: Float64Array;
  readonly #keep: number;

  constructor(
    private readonly options: RunOptions,
    private readonly rateHz: number,
    private readonly samples: number,
    private readonly statics: Statics,
    private readonly effects: readonly TroubleEffect[],
    private readonly truth: Truth[],
  ) {
    const { rig, motorLagS = 0.003 } = options;
    const n = rig.cableCount;
    this.#noise = options.noise ?? (options.exact ? noNoise : usualNoise);
    this.#watch = new TensionWatch(rig, n);
    this.#hand = restingHand(rig.home);
    this.#command = new Float64Array(n);
    this.#carried = new Float64Array(n);
    this.#lengths = new Float64Array(n);
    this.#keep = motorLagS === 0 ? 0 : Math.exp(-1 / (rateHz * motorLagS));
  }

  *chunks(step: (tS: number, hand: HandState, wrench: Float64Array) => void, sensors: Sensors): Generator<Chunk> {
    const size = this.options.chunkSamples ?? Math.round(this.rateHz);
    const channels = 8 + 2 * this.options.rig.cableCount + (this.options.wrench ? wrenchChannels.length : 0);
    const motors = new Float64Array(this.options.rig.cableCount);
    let kept = 0;
    let open = new OpenChunk(size, channels, kept);
    let lostFrom: number | null = null;
    for (let i = 0; i < this.samples; i += 1) {
      const tS = i / this.rateHz;
      step(tS, this.#hand, this.#wrench);
      this.#pull(tS, i === 0 ? 0 : this.#keep, motors);
      if (this.effects.some((effect) => effect.lost?.(tS))) {
        lostFrom ??= i;
        if (open.count > 0) yield open.close();
        open = new OpenChunk(size, channels, kept);
        continue;
      }
      if (lostFrom !== null && kept > 0) this.#lost(lostFrom, i);
      lostFrom = null;
      this.#watch.see(tS, this.#carried);
      this.#read(open, Math.round((i * 1e6) / this.rateHz), sensors);
      kept += 1;
      if (open.count === size) {
        yield open.close();
        open = new OpenChunk(size, channels, kept);
      }
    }
    if (open.count > 0) yield open.close();
    this.#finish();
  }

  /** Tensions that the controller asks for, that the motors give with their lag, and that the cables then carry. */
  #pull(tS: number, keep: number, motors: Float64Array): void {
    this.statics.hold(this.#wrench, this.#command);
    for (const effect of this.effects) effect.command?.(tS, this.statics, this.#command);
    for (let i = 0; i < motors.length; i += 1) motors[i] = keep * (motors[i] as number) + (1 - keep) * (this.#command[i] as number);
    this.#carried.set(motors);
    for (const effect of this.effects) effect.carried?.(tS, this.#carried);
    cableLengths(this.options.rig, this.#hand, this.#lengths);
    if (this.options.stretch) {
      const stretch = cableStretch(this.options.rig, this.#carried, this.#lengths);
      for (let i = 0; i < stretch.length; i += 1) this.#lengths[i] = (this.#lengths[i] as number) - (stretch[i] as number);
    }
    for (const effect of this.effects) effect.lengths?.(tS, this.#lengths);
  }

  #read(open: OpenChunk, timeUs: number, sensors: Sensors): void {
    const noise = this.#noise;
    const hand = this.#hand;
    open.begin(timeUs);
    for (let i = 0; i < 3; i += 1) open.put(sensors.read(hand.p[i] as number, noise.positionM, steps.pose));
    const turn: Vec3 = [sensors.noise(noise.turnRad), sensors.noise(noise.turnRad), sensors.noise(noise.turnRad)];
    turned(turn, 1, [...hand.q], hand.q);
    for (let i = 0; i < 4; i += 1) open.put(sensors.read(hand.q[i] as number, 0, steps.pose));
    const range = this.options.rig.graspRange;
    open.put(sensors.read(hand.grasp, noise.graspPart * (range.max - range.min), steps.pose));
    for (const tension of this.#carried) open.put(sensors.read(tension, noise.tensionN, steps.tension));
    for (const length of this.#lengths) open.put(sensors.read(length, noise.lengthM, steps.length));
    if (this.options.wrench) for (const part of this.#wrench) open.put(sensors.read(part, 0, steps.wrench));
  }

  #lost(from: number, to: number): void {
    this.truth.push({ kind: 'gap', cable: null, startS: (from - 1) / this.rateHz, endS: to / this.rateHz, peak: null });
  }

  #finish(): void {
    this.#watch.close(this.samples / this.rateHz);
    this.truth.push(...this.#watch.found, ...this.effects.flatMap(({ truth }) => truth));
    this.truth.sort((a, b) => a.startS - b.startS);
  }
}
