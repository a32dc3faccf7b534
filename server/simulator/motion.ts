/**
 * How the hand moves: a task's segments, one after another, each on the minimum-jerk course. SI units, base axes.
 */
import type { Pose, Quat, Vec3 } from '@shared/rig';
import { minimumJerk, type Progress } from './minimum-jerk';

/** What happens to the virtual thing when a segment ends: the jaws are around it, hold it, set it down, are clear of it. */
export type SegmentEffect = 'surround' | 'take' | 'let-go' | 'clear';

export type Segment = {
  durationS: number;
  /** Where it ends; a segment that ends where it began is a pause. */
  to: Pose;
  /** The way of the palm when it is not the straight line: a piece of a circle in the plane of `u` and `v`. */
  arc?: { centre: Vec3; u: Vec3; v: Vec3; radiusM: number; fromRad: number; sweepRad: number };
  effect?: SegmentEffect;
  /** Mark that the device makes when the segment starts. */
  mark?: string;
};

/** State of the hand at one time; written in place. */
export type HandState = {
  /** m, m/s, m/s^2 */
  p: Vec3;
  v: Vec3;
  a: Vec3;
  q: Quat;
  /** rad/s, base axes */
  omega: Vec3;
  /** m or rad, and per second */
  grasp: number;
  graspRate: number;
};

export type Move = { startS: number; endS: number; from: Pose; to: Pose };

export function restingHand(pose: Pose): HandState {
  return { p: [...pose.p], v: [0, 0, 0], a: [0, 0, 0], q: [...pose.q], omega: [0, 0, 0], grasp: pose.grasp, graspRate: 0 };
}

/** Plays segments forward in time. */
export class Motion {
  #segments: Iterator<Segment>;
  #current: Segment;
  #from: Pose;
  #turn: Vec3 = [0, 0, 0];
  #startS = 0;
  readonly #progress: Progress = { s: 0, rate: 0, bend: 0 };

  /** @param onStart told as each segment starts, with its end effect still to come */
  constructor(
    start: Pose,
    segments: Iterator<Segment>,
    private readonly onStart: (segment: Segment, startS: number, from: Pose) => void,
    private readonly onEnd: (segment: Segment, endS: number) => void,
  ) {
    this.#segments = segments;
    this.#from = start;
    this.#current = this.#take(start, 0);
  }

  /** @param tS seconds from the start, never less than the time before */
  at(tS: number, out: HandState): void {
    while (tS >= this.#startS + this.#current.durationS) {
      const ended = this.#current;
      const endS = this.#startS + ended.durationS;
      this.onEnd(ended, endS);
      this.#from = ended.to;
      this.#current = this.#take(ended.to, endS);
    }
    const { durationS, to, arc } = this.#current;
    const { s, rate, bend } = minimumJerk((tS - this.#startS) / durationS, this.#progress);
    const speed = rate / durationS;
    const push = bend / (durationS * durationS);
    const from = this.#from;
    if (arc) alongArc(arc, s, speed, push, out);
    else {
      for (let i = 0; i < 3; i += 1) {
        const way = (to.p[i] as number) - (from.p[i] as number);
        out.p[i] = (from.p[i] as number) + s * way;
        out.v[i] = speed * way;
        out.a[i] = push * way;
      }
    }
    const turn = this.#turn;
    for (let i = 0; i < 3; i += 1) out.omega[i] = speed * (turn[i] as number);
    turned(turn, s, from.q, out.q);
    out.grasp = from.grasp + s * (to.grasp - from.grasp);
    out.graspRate = speed * (to.grasp - from.grasp);
  }

  #take(from: Pose, startS: number): Segment {
    const next = this.#segments.next();
    if (next.done === true) throw new Error('a task ended; tasks go on until the run is over');
    this.#startS = startS;
    this.#turn = turnBetween(from.q, next.value.to.q);
    this.onStart(next.value, startS, from);
    return next.value;
  }
}

function alongArc(arc: NonNullable<Segment['arc']>, s: number, speed: number, push: number, out: HandState): void {
  const angle = arc.fromRad + s * arc.sweepRad;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  const w = speed * arc.sweepRad;
  const dw = push * arc.sweepRad;
  for (let i = 0; i < 3; i += 1) {
    const outward = cos * (arc.u[i] as number) + sin * (arc.v[i] as number);
    const forward = cos * (arc.v[i] as number) - sin * (arc.u[i] as number);
    out.p[i] = (arc.centre[i] as number) + arc.radiusM * outward;
    out.v[i] = arc.radiusM * w * forward;
    out.a[i] = arc.radiusM * (dw * forward - w * w * outward);
  }
}

/** Rotation vector [rad, base axes] that turns `from` into `to` by the shorter way. */
function turnBetween(from: Quat, to: Quat): Vec3 {
  const [ax, ay, az, aw] = from;
  const [bx, by, bz, bw] = to;
  // to * conjugate(from)
  let x = -bw * ax + bx * aw - by * az + bz * ay;
  let y = -bw * ay + bx * az + by * aw - bz * ax;
  let z = -bw * az - bx * ay + by * ax + bz * aw;
  let w = bw * aw + bx * ax + by * ay + bz * az;
  if (w < 0) [x, y, z, w] = [-x, -y, -z, -w];
  const sin = Math.hypot(x, y, z);
  if (sin < 1e-12) return [0, 0, 0];
  const scale = (2 * Math.atan2(sin, w)) / sin;
  return [x * scale, y * scale, z * scale];
}

/** Writes exp(part * turn) * q. */
export function turned(turn: Readonly<Vec3>, part: number, q: Readonly<Quat>, out: Quat): void {
  const angle = part * Math.hypot(turn[0], turn[1], turn[2]);
  const scale = angle < 1e-12 ? part / 2 : (part * Math.sin(angle / 2)) / angle;
  const [x, y, z, w] = [turn[0] * scale, turn[1] * scale, turn[2] * scale, Math.cos(angle / 2)];
  const [qx, qy, qz, qw] = q;
  out[0] = w * qx + x * qw + y * qz - z * qy;
  out[1] = w * qy - x * qz + y * qw + z * qx;
  out[2] = w * qz + x * qy - y * qx + z * qw;
  out[3] = w * qw - x * qx - y * qy - z * qz;
}
