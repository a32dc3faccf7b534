/** Where the reader stands: fixed places round the frame, the hand's own view, or anywhere. Base z is up. */
import { type Quaternion, Vector3 } from 'three';

export const cameraNames = ['free', 'front', 'side', 'top', 'hand'] as const;
export type CameraName = (typeof cameraNames)[number];

export const cameraWords: Readonly<Record<CameraName, string>> = { free: 'Free', front: 'Front', side: 'Side', top: 'Top', hand: 'Hand' };

export interface Stand {
  readonly position: Vector3;
  readonly target: Vector3;
}

/** Vertical field of view, degrees: a long lens, so that lengths stay comparable across the frame. */
export const FIELD_OF_VIEW = 27;

/** Room round the frame for the exits' numbers, m, and the share of the picture's width and free height that it may take. */
const NUMBERS_M = 0.055;
const FREE = { across: 0.96, up: 0.93 };

/** A picture, CSS px, and the strips at its head and foot that words take. */
export interface Picture {
  readonly width: number;
  readonly height: number;
  readonly head: number;
  readonly foot: number;
}

/** Below this width words stand over and under the frame; in a wider picture they stand beside it. */
const NARROW_PX = 640;

export const pictureOf = ({ width, height }: { width: number; height: number }, headed: boolean): Picture =>
  (width < NARROW_PX ? { width, height, head: headed ? 72 : 0, foot: 34 } : { width, height, head: 0, foot: 0 });

/**
 * As near as the whole frame stays in the picture and clear of its words.
 *
 * @param half half the frame's size along x, y, z, m
 */
export function standOf(name: Exclude<CameraName, 'hand'>, centre: Vector3, half: Vector3, { width, height, head, foot }: Picture): Stand {
  const from: Record<Exclude<CameraName, 'hand'>, Vector3> = {
    free: new Vector3(0.52, -1, 0.42),
    front: new Vector3(0, -1, 0.06),
    side: new Vector3(1, 0, 0.06),
    top: new Vector3(0, -0.0001, 1),
  };
  const toCamera = from[name].normalize();
  const right = new Vector3(0, 0, 1).cross(toCamera).normalize();
  const up = toCamera.clone().cross(right);
  const tangent = Math.tan((FIELD_OF_VIEW / 2) * (Math.PI / 180));
  const corner = new Vector3();
  const aspect = width / Math.max(1, height);
  const freeUp = (FREE.up * Math.max(1, height - head - foot)) / Math.max(1, height);
  let distance = 0;
  for (let i = 0; i < 8; i += 1) {
    corner.set(i & 1 ? 1 : -1, i & 2 ? 1 : -1, i & 4 ? 1 : -1).multiply(half).addScaledVector(corner.clone().normalize(), NUMBERS_M);
    const aside = Math.max(Math.abs(corner.dot(right)) / (tangent * aspect * FREE.across), Math.abs(corner.dot(up)) / (tangent * freeUp));
    distance = Math.max(distance, corner.dot(toCamera) + aside);
  }
  return { position: toCamera.multiplyScalar(distance).add(centre), target: centre.clone() };
}

/** Behind and above the palm, looking where it looks, turning with it. */
export function handStand(position: Vector3, turn: Quaternion, out: { position: Vector3; target: Vector3 }): void {
  out.position.set(0, -0.3, 0.16).applyQuaternion(turn).add(position);
  out.target.set(0, 0.04, 0).applyQuaternion(turn).add(position);
}
