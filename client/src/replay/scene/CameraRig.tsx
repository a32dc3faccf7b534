/** Moves the camera between its stands and lets the reader turn the scene by hand. */
import { useThree } from '@react-three/fiber';
import { useEffect, useEffectEvent, useRef } from 'react';
import { Fog, PerspectiveCamera, Vector3 } from 'three';
import { OrbitControls } from 'three/addons/controls/OrbitControls.js';
import { handStand, pictureOf, standOf, type CameraName } from './cameras';
import type { RigStage } from './rig-stage';

export interface CameraRigProps {
  readonly stage: RigStage;
  readonly camera: CameraName;
  /** The reader turned the scene: from now on they stand where they like. */
  readonly onFree: () => void;
  /** Subscribes to changes of the palm's pose, for the hand's view. */
  readonly onPose: (listener: () => void) => () => void;
  /** Words stand over the head of the picture. */
  readonly headed: boolean;
}

const MOVE_MS = 320;

/** What is behind the middle of the frame pales a little, from wherever one looks. */
function setFog(fog: unknown, distance: number, radius: number): void {
  if (!(fog instanceof Fog)) return;
  fog.near = Math.max(0.01, distance - radius * 0.9);
  fog.far = distance + radius * 2.4;
}

export function CameraRig({ stage, camera: name, onFree, onPose, headed }: CameraRigProps) {
  const { camera, gl, invalidate, size: { width, height }, scene } = useThree();
  const controls = useRef<OrbitControls | null>(null);
  const began = useEffectEvent(() => {
    if (name !== 'free') onFree();
  });
  /** The reader's own stand is kept when they come back from "front". */
  const turnedByHand = useRef(false);
  const placed = useRef(false);

  useEffect(() => {
    camera.up.set(0, 0, 1);
    const made = new OrbitControls(camera, gl.domElement);
    made.enableDamping = false;
    made.enablePan = false;
    made.minDistance = stage.radius * 0.4;
    made.maxDistance = stage.radius * 8;
    made.target.copy(stage.centre);
    // One finger up and down scrolls the page; sideways it turns the scene.
    gl.domElement.style.touchAction = 'pan-y';
    const change = () => {
      setFog(scene.fog, camera.position.distanceTo(stage.centre), stage.radius);
      invalidate();
    };
    const start = () => {
      turnedByHand.current = true;
      began();
    };
    made.addEventListener('change', change);
    made.addEventListener('start', start);
    controls.current = made;
    return () => {
      made.dispose();
      controls.current = null;
    };
  }, [camera, gl, invalidate, scene, stage]);

  // The middle of what words leave free is the middle of the frame.
  useEffect(() => {
    if (!(camera instanceof PerspectiveCamera)) return;
    const { head, foot } = pictureOf({ width, height }, headed);
    if (head === foot) camera.clearViewOffset();
    else camera.setViewOffset(width, height, 0, (foot - head) / 2, width, height);
    invalidate();
  }, [camera, invalidate, width, height, headed]);

  useEffect(() => {
    const orbit = controls.current;
    if (!orbit) return;
    if (name === 'hand') {
      const stand = { position: new Vector3(), target: new Vector3() };
      const follow = () => {
        handStand(stage.palmPosition, stage.palmTurn, stand);
        camera.position.copy(stand.position);
        orbit.target.copy(stand.target);
        orbit.update();
        invalidate();
      };
      orbit.minDistance = 0.05;
      follow();
      return onPose(follow);
    }
    orbit.minDistance = stage.radius * 0.4;
    if (name === 'free' && turnedByHand.current) {
      orbit.target.copy(stage.centre);
      orbit.update();
      return;
    }
    const stand = standOf(name, stage.centre, stage.half, pictureOf({ width, height }, headed));
    const from = { position: camera.position.clone(), target: orbit.target.clone() };
    const still = !placed.current || matchMedia('(prefers-reduced-motion: reduce)').matches;
    placed.current = true;
    const startMs = performance.now();
    let frame: number | null = null;
    const move = () => {
      const share = still ? 1 : Math.min(1, (performance.now() - startMs) / MOVE_MS);
      const eased = 1 - (1 - share) ** 3;
      camera.position.lerpVectors(from.position, stand.position, eased);
      orbit.target.lerpVectors(from.target, stand.target, eased);
      orbit.update();
      invalidate();
      frame = share < 1 ? requestAnimationFrame(move) : null;
    };
    move();
    return () => {
      if (frame !== null) cancelAnimationFrame(frame);
    };
  }, [name, camera, invalidate, onPose, stage, width, height, headed]);

  return null;
}
