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

/**
 * @param radius half the frame's diagonal, m
 * @param aspect width over height of the picture: on a narrow one the reader steps back
 */
export function standOf(name: Exclude<CameraName, 'hand'>, centre: Vector3, radius: number, aspect: number): Stand {
  const half = (FIELD_OF_VIEW / 2) * (Math.PI / 180);
  const fit = (radius * (name === 'free' ? 0.92 : 0.86)) / Math.sin(half) / Math.min(1, aspect * 0.95);
  const from: Record<Exclude<CameraName, 'hand'>, Vector3> = {
    free: new Vector3(0.52, -1, 0.42),
    front: new Vector3(0, -1, 0.06),
    side: new Vector3(1, 0, 0.06),
    top: new Vector3(0, -0.0001, 1),
  };
  return { position: from[name].normalize().multiplyScalar(fit).add(centre), target: centre.clone() };
}

/** Behind and above the palm, looking where it looks, turning with it. */
export function handStand(position: Vector3, turn: Quaternion, out: { position: Vector3; target: Vector3 }): void {
  out.position.set(0, -0.3, 0.16).applyQuaternion(turn).add(position);
  out.target.set(0, 0.04, 0).applyQuaternion(turn).add(position);
}
