/**
 * Palm and jaws as solid bodies, made from what the rig file says of them.
 *
 * The file knows attachments and motions, not shapes, so the shapes are ours: a sliding jaw is a plate whose inner face
 * stands where the grasp is zero, so that the gap between two plates is the grasp itself; a hinged jaw is a finger
 * from its hinge; the palm is the rail or axle that carries them. Arms lead to every attachment, so that each cable
 * ends at something.
 */
import { BoxGeometry, CylinderGeometry, Group, Mesh, Quaternion, SphereGeometry, Vector3, type BufferGeometry, type Material } from 'three';
import type { RigFile } from '@shared/rig/rig-file';

type Body = RigFile['bodies'][number];
type Attachment = RigFile['cables'][number]['attach'];

export interface HandBodies {
  /** In palm axes; place and turn it by the pose. */
  readonly group: Group;
  setGrasp(grasp: number): void;
}

const UP = new Vector3(0, 1, 0);

/**
 * Where a body stands in the palm frame at a grasp: rotation and shift that take its points at grasp 0 there.
 * Same convention as the attachments of shared/rig.
 */
export function bodyPlace(body: Body, grasp: number, turn: Quaternion, shift: Vector3): void {
  turn.identity();
  shift.set(0, 0, 0);
  const { motion } = body;
  if (!motion) return;
  if (motion.kind === 'slide') {
    shift.fromArray(motion.axis).normalize().multiplyScalar(motion.ratio * grasp);
    return;
  }
  turn.setFromAxisAngle(new Vector3().fromArray(motion.axis).normalize(), motion.ratio * grasp);
  const origin = new Vector3().fromArray(motion.origin);
  shift.copy(origin).sub(origin.clone().applyQuaternion(turn));
}

/** @param materials solid for plates and palm, arm for the thin parts */
export function makeHandBodies(file: RigFile, materials: { solid: Material; arm: Material }): HandBodies {
  const group = new Group();
  const parts = file.bodies.map((body) => {
    const part = new Group();
    const attachments = file.cables.filter((cable) => cable.body === body.name).map((cable) => cable.attach);
    const hub = body.motion ? jaw(part, body, attachments, materials.solid) : palm(part, file, materials.solid);
    for (const attachment of attachments) arm(part, hub(attachment), new Vector3().fromArray(attachment), materials.arm);
    group.add(part);
    return { body, part };
  });
  const turn = new Quaternion();
  const shift = new Vector3();
  return {
    group,
    setGrasp(grasp) {
      for (const { body, part } of parts) {
        bodyPlace(body, grasp, turn, shift);
        part.quaternion.copy(turn);
        part.position.copy(shift);
      }
    },
  };
}

/** From where on the body an arm to an attachment starts. */
type Hub = (attachment: Attachment) => Vector3;

function jaw(part: Group, body: Body, attachments: readonly Attachment[], material: Material): Hub {
  const { motion } = body;
  if (!motion) return () => new Vector3();
  const axis = new Vector3().fromArray(motion.axis).normalize();
  const middle = mean(attachments);
  if (motion.kind === 'slide') {
    const outward = axis.clone().multiplyScalar(Math.sign(motion.ratio) || 1);
    const plate = solid(new BoxGeometry(0.011, 0.052, 0.062), material);
    plate.quaternion.setFromUnitVectors(new Vector3(1, 0, 0), outward);
    const centre = outward.clone().multiplyScalar(0.0055);
    plate.position.copy(centre);
    part.add(plate);
    // Arms leave the plate's outer face at the height of their attachment.
    return (attachment) => {
      const to = new Vector3().fromArray(attachment);
      const across = to.clone().addScaledVector(outward, -to.dot(outward));
      across.clampLength(0, 0.024);
      return across.addScaledVector(outward, 0.009);
    };
  }
  const origin = new Vector3().fromArray(motion.origin);
  const along = middle.clone().sub(origin);
  along.addScaledVector(axis, -along.dot(axis));
  const length = Math.max(0.03, along.length() * 1.15);
  if (along.lengthSq() < 1e-8) along.set(0, 0, 1);
  along.normalize();
  const thick = new Vector3().crossVectors(axis, along).normalize();
  const finger = solid(new BoxGeometry(0.011, length, 0.034), material);
  const basis = new Quaternion();
  finger.matrix.makeBasis(thick, along, axis.clone());
  basis.setFromRotationMatrix(finger.matrix);
  finger.quaternion.copy(basis);
  finger.position.copy(origin).addScaledVector(along, length / 2);
  part.add(finger);
  rod(part, origin.clone().addScaledVector(axis, -0.022), origin.clone().addScaledVector(axis, 0.022), 0.0075, material);
  return (attachment) => {
    const to = new Vector3().fromArray(attachment).sub(origin);
    return origin.clone().addScaledVector(along, Math.min(length, Math.max(0, to.dot(along))));
  };
}

function palm(part: Group, file: RigFile, material: Material): Hub {
  const slides = file.bodies.flatMap(({ motion }) => (motion?.kind === 'slide' ? [motion] : []));
  const hinges = file.bodies.flatMap(({ motion }) => (motion?.kind === 'hinge' ? [motion] : []));
  const first = slides[0];
  if (first) {
    // The rail that the jaws slide on, long enough for the widest grasp.
    const axis = new Vector3().fromArray(first.axis).normalize();
    const reach = Math.abs(first.ratio) * file.grasp.max + 0.02;
    rod(part, axis.clone().multiplyScalar(-reach), axis.clone().multiplyScalar(reach), 0.006, material);
    return () => new Vector3();
  }
  const origins = hinges.map(({ origin }) => new Vector3().fromArray(origin));
  const body = solid(new SphereGeometry(0.016, 24, 16), material);
  part.add(body);
  for (const origin of origins) if (origin.lengthSq() > 1e-8) rod(part, new Vector3(), origin, 0.007, material);
  return () => new Vector3();
}

function arm(part: Group, from: Vector3, to: Vector3, material: Material): void {
  rod(part, from, to, 0.0026, material);
  const knob = solid(new SphereGeometry(0.0046, 14, 10), material);
  knob.position.copy(to);
  part.add(knob);
}

function rod(part: Group, from: Vector3, to: Vector3, radius: number, material: Material): void {
  const along = to.clone().sub(from);
  const length = along.length();
  if (length < 1e-6) return;
  const mesh = solid(new CylinderGeometry(radius, radius, length, 14), material);
  mesh.position.copy(from).addScaledVector(along, 0.5);
  mesh.quaternion.setFromUnitVectors(UP, along.normalize());
  part.add(mesh);
}

function solid(geometry: BufferGeometry, material: Material): Mesh {
  const mesh = new Mesh(geometry, material);
  mesh.castShadow = true;
  return mesh;
}

function mean(points: readonly Attachment[]): Vector3 {
  const sum = new Vector3();
  for (const point of points) sum.add(new Vector3().fromArray(point));
  return points.length > 0 ? sum.divideScalar(points.length) : sum;
}
