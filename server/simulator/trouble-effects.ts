/** What each scripted trouble does to the hand, the wrench, the tensions and the readings while it lasts. */
import type { Vec3 } from '@shared/rig';
import type { HandState } from './motion';
import type { Random } from './random';
import type { Statics } from './statics';
import type { Trouble } from './trouble';
import type { Truth } from './truth';

/** Each hook gets the time [s] and changes what it is given in place. */
export type TroubleEffect = {
  trouble: Trouble;
  hand?(tS: number, hand: HandState): void;
  wrench?(tS: number, statics: Statics, wrench: Float64Array): void;
  /** Tensions that the controller asks for. */
  command?(tS: number, statics: Statics, tensions: Float64Array): void;
  /** Tensions that the cables carry. */
  carried?(tS: number, tensions: Float64Array): void;
  lengths?(tS: number, lengths: Float64Array): void;
  lost?(tS: number): boolean;
  /** What a reader of the recording should find, where the tensions do not say it by themselves. */
  truth: Truth[];
};

/** A dip and a loosened rig hang at this part of the slack threshold. */
const HANGING = 0.4;
const SLIP_M = 0.0025;
const SHAKE_M = 3e-4;
const SHAKE_N = 2;
/** Push beyond the largest wrench that the limits allow. */
const BEYOND = 1.2;
/** Part of its limit at which a cable is near it. */
const NEAR = 0.92;
/** A cable that comes off loses its tension with this time constant, and its drum takes up that much line, s and m/s. */
const COMES_OFF_S = 0.02;
const TAKES_UP = 0.4;
const TAKES_UP_MOST_M = 0.09;

export function effectOf(trouble: Trouble, statics: Statics, random: Random): TroubleEffect {
  const { kind, atS, durationS, cable } = trouble;
  const endS = atS + durationS;
  const { rig } = statics;
  const during = (tS: number) => tS >= atS && tS < endS;
  switch (kind) {
    case 'slack': {
      const edge = Math.min(0.03, durationS / 4);
      const level = HANGING * rig.slackBelow * random.between(0.5, 1.2);
      return {
        trouble, truth: [],
        carried(tS, tensions) {
          if (during(tS)) mix(tensions, cable - 1, level, swell(tS - atS, durationS, edge));
        },
      };
    }
    case 'pretension':
      return {
        trouble, truth: [],
        command(tS, at, tensions) {
          if (during(tS)) at.loosen(HANGING * rig.slackBelow, swell(tS - atS, durationS, 0.3 * durationS), tensions);
        },
      };
    case 'saturation':
    case 'near-limit': {
      let forceN: number | null = null;
      return {
        trouble, truth: [],
        wrench(tS, at, wrench) {
          if (!during(tS)) return;
          forceN ??= kind === 'saturation'
            ? BEYOND * at.pullUntil(cable, wrench, () => false)
            : at.pullUntil(cable, wrench, (tensions) => Math.max(...tensions) > NEAR * rig.tensionMax);
          at.pull(cable, forceN * swell(tS - atS, durationS, 0.3 * durationS), wrench);
        },
      };
    }
    case 'slip': {
      const stepM = SLIP_M * random.between(0.8, 1.4) * random.pick([-1, 1]);
      return {
        trouble,
        truth: [{ kind: 'slip', cable, startS: atS, endS: null, peak: stepM }],
        lengths(tS, lengths) {
          if (tS >= atS) lengths[cable - 1] = (lengths[cable - 1] as number) + stepM;
        },
      };
    }
    case 'oscillation':
      return oscillation(trouble, random);
    case 'gap':
      return { trouble, truth: [], lost: during };
    case 'cable-off':
      return {
        trouble,
        truth: [{ kind: 'slip', cable, startS: atS, endS: null, peak: null }],
        carried(tS, tensions) {
          if (tS >= atS) tensions[cable - 1] = (tensions[cable - 1] as number) * Math.exp((atS - tS) / COMES_OFF_S);
        },
        lengths(tS, lengths) {
          if (tS >= atS) lengths[cable - 1] = (lengths[cable - 1] as number) - Math.min(TAKES_UP_MOST_M, TAKES_UP * (tS - atS));
        },
      };
  }
}

function oscillation(trouble: Trouble, random: Random): TroubleEffect {
  const { atS, durationS } = trouble;
  const omega = 2 * Math.PI * random.between(25, 40);
  const towards: Vec3 = [random.normal(), random.normal(), random.normal()];
  const norm = Math.hypot(...towards);
  const share = (tS: number) => (tS < atS || tS >= atS + durationS ? 0 : swell(tS - atS, durationS, 0.04) * Math.sin(omega * (tS - atS)));
  return {
    trouble,
    truth: [{ kind: 'oscillation', cable: null, startS: atS, endS: atS + durationS, peak: null }],
    hand(tS, hand) {
      const s = share(tS);
      for (let i = 0; i < 3; i += 1) hand.p[i] = (hand.p[i] as number) + (SHAKE_M * s * (towards[i] as number)) / norm;
    },
    wrench(tS, _statics, wrench) {
      const s = share(tS);
      for (let i = 0; i < 3; i += 1) wrench[i] = (wrench[i] as number) + (SHAKE_N * s * (towards[i] as number)) / norm;
    },
  };
}

/** 0 at both ends and 1 between, with half-cosine edges. */
function swell(sinceS: number, durationS: number, edgeS: number): number {
  const inwards = Math.min(sinceS, durationS - sinceS);
  return inwards >= edgeS ? 1 : 0.5 - 0.5 * Math.cos((Math.PI * Math.max(0, inwards)) / edgeS);
}

function mix(values: Float64Array, i: number, level: number, share: number): void {
  values[i] = (1 - share) * (values[i] as number) + share * Math.min(level, values[i] as number);
}
