/**
 * Tremor of a hand: narrow-band shaking between 8 and 12 Hz on every axis, swelling and fading.
 *
 * Each axis is two sines a few tenths of a hertz apart, so that they beat. The band is the one that this product measures
 * tremor power in; amplitudes of a tenth of a millimetre are common practice for a healthy supported hand, from memory.
 */
import type { HandState } from './motion';
import { turned } from './motion';
import type { Vec3 } from '@shared/rig';
import type { Random } from './random';

const LOW_HZ = 8.3;
const HIGH_HZ = 11.7;

type Sine = { axis: number; turns: boolean; amplitude: number; omega: number; phase: number };

export class Tremor {
  readonly #sines: Sine[];
  readonly #turn: Vec3 = [0, 0, 0];

  /** @param amplitudeM of the palm's shaking on one axis; 0 makes a hand without tremor */
  constructor(amplitudeM: number, random: Random) {
    this.#sines = amplitudeM === 0 ? [] : [0, 1, 2, 3, 4, 5].flatMap((i) => {
      const turns = i >= 3;
      // One tenth of a millimetre goes with about 0.06 degrees.
      const amplitude = random.between(0.5, 1) * (turns ? amplitudeM * 10 : amplitudeM);
      const hz = random.between(LOW_HZ + 0.4, HIGH_HZ - 0.4);
      const apart = random.between(0.1, 0.4);
      return [hz - apart, hz + apart].map((f, k) => ({
        axis: i % 3, turns, amplitude: amplitude * (k === 0 ? 0.6 : 0.4), omega: 2 * Math.PI * f, phase: random.between(0, 2 * Math.PI),
      }));
    });
  }

  /** Adds the shaking at a time to the hand's state. */
  shake(tS: number, hand: HandState): void {
    if (this.#sines.length === 0) return;
    const turn = this.#turn;
    turn.fill(0);
    for (const { axis, turns, amplitude, omega, phase } of this.#sines) {
      const angle = omega * tS + phase;
      const sin = amplitude * Math.sin(angle);
      const rate = amplitude * omega * Math.cos(angle);
      if (turns) {
        turn[axis] = (turn[axis] as number) + sin;
        hand.omega[axis] = (hand.omega[axis] as number) + rate;
      } else {
        hand.p[axis] = (hand.p[axis] as number) + sin;
        hand.v[axis] = (hand.v[axis] as number) + rate;
        hand.a[axis] = (hand.a[axis] as number) - omega * omega * sin;
      }
    }
    turned(turn, 1, [...hand.q], hand.q);
  }
}
