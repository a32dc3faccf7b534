/**
 * One cable in the scene. Its state is told by shape first: taut is a straight cord as thick as it pulls, slack hangs
 * as dashes, saturated is a thick bar between two flanges, near the limit a cord with a collar in its middle.
 */
import { CylinderGeometry, Group, InstancedMesh, Matrix4, Mesh, type MeshLambertMaterial, Quaternion, Vector3 } from 'three';
import type { StringState } from '../stave/string-runs';

export interface CableMaterials {
  readonly taut: MeshLambertMaterial;
  readonly near: MeshLambertMaterial;
  readonly saturated: MeshLambertMaterial;
  readonly slack: MeshLambertMaterial;
  readonly missing: MeshLambertMaterial;
}

export interface CableMesh {
  readonly group: Group;
  /** @param share tension over its limit, 0 to 1 */
  set(exit: Vector3, attachment: Vector3, state: StringState, share: number): void;
}

const UP = new Vector3(0, 1, 0);
const DASHES = 17;
/** Sag of a slack cable in the middle, as a share of its span. A picture, not a measurement: the length tells it. */
const SAG_SHARE = 0.1;

const unit = new CylinderGeometry(1, 1, 1, 10);

export function makeCable(materials: CableMaterials): CableMesh {
  const group = new Group();
  const cord = new Mesh(unit, materials.taut);
  const collars = [new Mesh(unit, materials.saturated), new Mesh(unit, materials.saturated)];
  const dashes = new InstancedMesh(unit, materials.slack, DASHES);
  dashes.frustumCulled = false;
  for (const mesh of [cord, ...collars, dashes]) {
    mesh.castShadow = true;
    group.add(mesh);
  }
  const [along, from, to, middle, scale] = [new Vector3(), new Vector3(), new Vector3(), new Vector3(), new Vector3()];
  const turn = new Quaternion();
  const matrix = new Matrix4();

  /** Point of a hanging cord: parabola below the straight line (a cord of small sag; base z is up). */
  const hang = (out: Vector3, exit: Vector3, attachment: Vector3, share: number, sag: number) => {
    out.lerpVectors(exit, attachment, share);
    out.z -= 4 * sag * share * (1 - share);
  };

  const setDashes = (exit: Vector3, attachment: Vector3, sag: number, radius: number) => {
    for (let i = 0; i < DASHES; i += 1) {
      hang(from, exit, attachment, (i + 0.2) / DASHES, sag);
      hang(to, exit, attachment, (i + 0.8) / DASHES, sag);
      along.subVectors(to, from);
      const length = along.length();
      middle.addVectors(from, to).multiplyScalar(0.5);
      turn.setFromUnitVectors(UP, along.divideScalar(length || 1));
      dashes.setMatrixAt(i, matrix.compose(middle, turn, scale.set(radius, length, radius)));
    }
    dashes.instanceMatrix.needsUpdate = true;
  };

  return {
    group,
    set(exit, attachment, state, share) {
      const broken = state === 'slack' || state === 'missing';
      cord.visible = !broken;
      dashes.visible = broken;
      for (const collar of collars) collar.visible = state === 'saturated';
      const length = exit.distanceTo(attachment);
      if (broken) {
        dashes.material = state === 'slack' ? materials.slack : materials.missing;
        setDashes(exit, attachment, state === 'slack' ? SAG_SHARE * length : 0, state === 'slack' ? 0.0019 : 0.0009);
        return;
      }
      const radius = state === 'saturated' ? 0.0046 : 0.0011 + 0.0026 * Math.min(1, Math.max(0, share));
      cord.material = state === 'saturated' ? materials.saturated : state === 'near' ? materials.near : materials.taut;
      along.subVectors(attachment, exit).divideScalar(length || 1);
      turn.setFromUnitVectors(UP, along);
      cord.position.addVectors(exit, attachment).multiplyScalar(0.5);
      cord.quaternion.copy(turn);
      cord.scale.set(radius, length, radius);
      collars.forEach((collar, i) => {
        collar.position.lerpVectors(exit, attachment, i === 0 ? 0.06 : 0.94);
        collar.quaternion.copy(turn);
        collar.scale.set(0.011, 0.004, 0.011);
      });
      if (state === 'near') {
        const [collar] = collars;
        if (collar) {
          collar.visible = true;
          collar.material = materials.near;
          collar.position.lerpVectors(exit, attachment, 0.5);
          collar.scale.set(0.0075, 0.012, 0.0075);
        }
      } else {
        for (const collar of collars) collar.material = materials.saturated;
      }
    },
  };
}
