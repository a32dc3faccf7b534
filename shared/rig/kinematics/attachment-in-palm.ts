import type { RigModel } from '../rig-model';

/**
 * Where cable i holds the device, in palm axes, and how that moves with the grasp.
 *
 * @param out 9 numbers: attachment b [m], db/dg, d2b/dg2 (m per unit of grasp once and twice)
 */
export function attachmentInPalm(rig: RigModel, i: number, grasp: number, out: Float64Array): Float64Array {
  const k = rig.hingeRatio[i]!;
  const { fixedPart, slidePart, cosPart, sinPart } = rig;
  const at = 3 * i;
  if (k === 0) {
    // Fixed to the palm or sliding: no angle, which most cables have and hot loops should not pay for.
    for (let axis = 0; axis < 3; axis++) {
      const slide = slidePart[at + axis]!;
      out[axis] = fixedPart[at + axis]! + grasp * slide + cosPart[at + axis]!;
      out[3 + axis] = slide;
      out[6 + axis] = 0;
    }
    return out;
  }
  const cos = Math.cos(k * grasp);
  const sin = Math.sin(k * grasp);
  for (let axis = 0; axis < 3; axis++) {
    const slide = slidePart[at + axis]!;
    const c = cosPart[at + axis]!;
    const s = sinPart[at + axis]!;
    out[axis] = fixedPart[at + axis]! + grasp * slide + cos * c + sin * s;
    out[3 + axis] = slide + k * (cos * s - sin * c);
    out[6 + axis] = -k * k * (cos * c + sin * s);
  }
  return out;
}
