/**
 * The rig as a three.js group, moved by plain calls: no React state per frame, no new objects per frame. Base frame as in
 * the rig file: metres, z up.
 */
import {
  BufferGeometry, Color, CylinderGeometry, ConeGeometry, DirectionalLight, Float32BufferAttribute, Fog, Group, HemisphereLight, InstancedMesh, Line, LineBasicMaterial, LineDashedMaterial,
  Matrix4, Mesh, MeshBasicMaterial, MeshLambertMaterial, Quaternion, RingGeometry, type Scene, ShadowMaterial, SphereGeometry, Vector3,
} from 'three';
import { attachmentPoints } from '@shared/rig/kinematics/attachment-points';
import type { Pose } from '@shared/rig/pose';
import { rigModel } from '@shared/rig/rig-model';
import type { RigFile } from '@shared/rig/rig-file';
import type { Palette } from '../palette';
import type { StringState } from '../stave/string-runs';
import { makeCable } from './cable-meshes';
import { makeExits, makeFloor, makeFrame } from './frame-meshes';
import { makeHandBodies } from './hand-bodies';
import { makeNumberLabel } from './number-label';

export interface StagedCable {
  readonly state: StringState;
  /** Tension over its limit. */
  readonly share: number;
}

export interface RigStage {
  readonly group: Group;
  /** Middle of the frame and half its diagonal, m: where the cameras look. */
  readonly centre: Vector3;
  readonly radius: number;
  /** Half the frame's size along x, y, z, m. */
  readonly half: Vector3;
  readonly palmPosition: Vector3;
  readonly palmTurn: Quaternion;
  setPose(pose: Pose | null, cables: readonly StagedCable[]): void;
  /** @param force N in base axes; null hides the arrow */
  setForce(force: readonly [number, number, number] | null): void;
  /** Past positions of the palm, newest first, x y z each; their spacing in time is even, so that distance is speed. */
  setTrail(points: Float32Array, count: number): void;
  setPalette(palette: Palette, scene: Scene): void;
  dispose(): void;
}

export const TRAIL_POINTS = 48;
/** Length of the force arrow, m per N. */
const ARROW_M_PER_N = 0.012;
const LONGEST_ARROW_M = 0.22;
const UP = new Vector3(0, 1, 0);

export function makeRigStage(file: RigFile): RigStage {
  const model = rigModel(file);
  const group = new Group();
  const frameMin = new Vector3().fromArray(file.frame.min);
  const frameMax = new Vector3().fromArray(file.frame.max);
  const centre = frameMin.clone().add(frameMax).multiplyScalar(0.5);
  const radius = frameMin.distanceTo(frameMax) / 2;
  const half = frameMax.clone().sub(frameMin).multiplyScalar(0.5);

  const lambert = () => new MeshLambertMaterial();
  const cableMaterials = { taut: lambert(), near: lambert(), saturated: lambert(), slack: lambert(), missing: lambert() };
  const [frameMaterial, exitMaterial, solidMaterial, armMaterial] = [lambert(), lambert(), lambert(), lambert()];
  const inkMaterial = new MeshBasicMaterial();
  const trailMaterial = new MeshBasicMaterial({ transparent: true, opacity: 0.55 });
  const floorLine = new LineBasicMaterial();
  const plumbLine = new LineDashedMaterial({ dashSize: 0.012, gapSize: 0.01 });
  const shadow = new ShadowMaterial({ opacity: 0.2 });

  group.add(makeFrame(file, frameMaterial), makeFloor(file, floorLine, shadow), makeExits(file, exitMaterial));
  const labels = file.cables.map((cable, i) => {
    const label = makeNumberLabel(String(i + 1));
    // A little outside the exit, away from the middle, so that the ball stays in sight.
    const outward = new Vector3().fromArray(cable.exit).sub(centre).setLength(0.034);
    label.sprite.position.fromArray(cable.exit).add(outward);
    group.add(label.sprite);
    return label;
  });

  const hand = new Group();
  const bodies = makeHandBodies(file, { solid: solidMaterial, arm: armMaterial });
  hand.add(bodies.group);
  group.add(hand);
  const cables = file.cables.map((cable) => ({ exit: new Vector3().fromArray(cable.exit), at: new Vector3(), mesh: makeCable(cableMaterials) }));
  for (const { mesh } of cables) group.add(mesh.group);

  const arrow = new Group();
  const shaft = new Mesh(new CylinderGeometry(0.0042, 0.0042, 1, 12), inkMaterial);
  const head = new Mesh(new ConeGeometry(0.012, 0.026, 16), inkMaterial);
  arrow.add(shaft, head);
  arrow.visible = false;
  group.add(arrow);

  const plumb = new Line(new BufferGeometry().setAttribute('position', new Float32BufferAttribute(6, 3)), plumbLine);
  plumb.frustumCulled = false;
  const ring = new Mesh(new RingGeometry(0.014, 0.0165, 32), inkMaterial);
  group.add(plumb, ring);

  const trail = new InstancedMesh(new SphereGeometry(1, 8, 6), trailMaterial, TRAIL_POINTS);
  trail.frustumCulled = false;
  trail.count = 0;
  group.add(trail);

  const hemisphere = new HemisphereLight(undefined, undefined, 1.9);
  const sun = new DirectionalLight(undefined, 1.7);
  sun.position.copy(centre).add(new Vector3(radius * 0.35, -radius * 0.5, radius * 2));
  sun.target.position.copy(centre);
  sun.castShadow = true;
  sun.shadow.mapSize.set(1024, 1024);
  sun.shadow.radius = 5;
  sun.shadow.bias = -0.0004;
  const reach = radius * 0.9;
  Object.assign(sun.shadow.camera, { left: -reach, right: reach, top: reach, bottom: -reach, near: 0.01, far: radius * 4 });
  group.add(hemisphere, sun, sun.target);

  const points = new Float64Array(3 * model.cableCount);
  const [along, spot] = [new Vector3(), new Vector3()];
  const turn = new Quaternion();
  const matrix = new Matrix4();
  const scale = new Vector3();

  const setPose = (pose: Pose | null, staged: readonly StagedCable[]) => {
    hand.visible = pose !== null;
    plumb.visible = pose !== null;
    ring.visible = pose !== null;
    if (!pose) arrow.visible = false;
    for (const { mesh } of cables) mesh.group.visible = pose !== null;
    if (!pose) return;
    hand.position.fromArray(pose.p);
    hand.quaternion.fromArray(pose.q).normalize();
    bodies.setGrasp(pose.grasp);
    attachmentPoints(model, pose, points);
    cables.forEach((cable, i) => {
      cable.at.fromArray(points, 3 * i);
      const stage = staged[i];
      cable.mesh.set(cable.exit, cable.at, stage?.state ?? 'taut', stage?.share ?? 0.4);
    });
    const position = plumb.geometry.getAttribute('position');
    position.setXYZ(0, pose.p[0], pose.p[1], pose.p[2]);
    position.setXYZ(1, pose.p[0], pose.p[1], file.frame.min[2]);
    position.needsUpdate = true;
    plumb.computeLineDistances();
    ring.position.set(pose.p[0], pose.p[1], file.frame.min[2] + 0.0012);
  };

  return {
    group,
    centre,
    radius,
    half,
    palmPosition: hand.position,
    palmTurn: hand.quaternion,
    setPose,
    setForce(force) {
      const size = force ? Math.hypot(...force) : 0;
      arrow.visible = force !== null && Number.isFinite(size) && size > 0.3 && hand.visible;
      if (!force || !arrow.visible) return;
      const length = Math.min(LONGEST_ARROW_M, Math.max(0.03, size * ARROW_M_PER_N));
      along.fromArray(force).divideScalar(size);
      turn.setFromUnitVectors(UP, along);
      arrow.position.copy(hand.position);
      arrow.quaternion.copy(turn);
      shaft.scale.set(1, length - 0.026, 1);
      shaft.position.set(0, (length - 0.026) / 2, 0);
      head.position.set(0, length - 0.013, 0);
    },
    setTrail(trailPoints, count) {
      trail.count = Math.min(count, TRAIL_POINTS);
      turn.identity();
      for (let i = 0; i < trail.count; i += 1) {
        const size = 0.0042 * (1 - (0.75 * i) / TRAIL_POINTS);
        trail.setMatrixAt(i, matrix.compose(spot.fromArray(trailPoints, 3 * i), turn, scale.setScalar(size)));
      }
      trail.instanceMatrix.needsUpdate = true;
    },
    setPalette(palette, scene) {
      const paper = new Color(palette.sheet);
      scene.background = paper;
      // What is far takes on the paper: the frame's back steps back.
      const before = scene.fog instanceof Fog ? scene.fog : null;
      scene.fog = new Fog(paper, before?.near ?? radius * 3, before?.far ?? radius * 7);
      cableMaterials.taut.color.set(palette.string);
      cableMaterials.near.color.set(palette.near);
      cableMaterials.saturated.color.set(palette.saturated);
      cableMaterials.slack.color.set(palette.slack);
      cableMaterials.missing.color.set(palette.gap);
      frameMaterial.color.set(palette.frame);
      exitMaterial.color.set(palette.ink);
      solidMaterial.color.set(palette.palm);
      armMaterial.color.set(palette.inkSoft);
      inkMaterial.color.set(palette.ink);
      trailMaterial.color.set(palette.inkFaint);
      floorLine.color.set(palette.floor);
      plumbLine.color.set(palette.inkFaint);
      hemisphere.color.set(palette.sheet).lerp(new Color(1, 1, 1), 0.85);
      hemisphere.groundColor.set(palette.inkSoft);
      shadow.color.set(0);
      for (const label of labels) label.setColours(palette.ink, palette.sheet);
    },
    dispose() {
      for (const label of labels) label.dispose();
      group.traverse((object) => {
        if (!(object instanceof Mesh) && !(object instanceof Line)) return;
        object.geometry.dispose();
        for (const material of [object.material].flat()) material.dispose();
      });
      sun.shadow.map?.dispose();
    },
  };
}
