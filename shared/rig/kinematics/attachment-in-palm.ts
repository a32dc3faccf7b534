import type { RigModel } from '../rig-model';

/**
 * Where cable i holds the device, in palm axes, and how that moves with the grasp.
 *
 * @param out 9 numbers: attachment b [m], db/dg, d2b/dg2 (m per unit of grasp once and twice)
 */
export function attachmentInPalm(rig: RigModel, i: number, grasp: number, out: Float64Array): Float64Array {
  const k = rig.hingeRatio[i]!;
  const cos = k === 0 ? 1 : Math.cos(k * grasp);
  const sin = k === 0 ? 0 : Math.sin(k * grasp);
  for (let axis = 0; axis < 3; axis++) {
    const at = 3 * i + axis;
    const slide = rig.slidePart[at]!;
    const c = rig.cosPart[at]!;
    const s = rig.sinPart[at]!;
    out[axis] = rig.fixedPart[at]! + grasp * slide + cos * c + sin * s;
    out[3 + axis] = slide + k * (cos * s - sin * c);
    out[6 + axis] = -k * k * (cos * c + sin * s);
  }
  return out;
}
