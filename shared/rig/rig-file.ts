import { z } from 'zod';

const number = z.number();
const vec3 = z.tuple([number, number, number]);

const slideMotion = z.strictObject({ kind: z.literal('slide'), axis: vec3, ratio: number });
const hingeMotion = z.strictObject({ kind: z.literal('hinge'), axis: vec3, origin: vec3, ratio: number });

/**
 * Shape of a rig file, format `tautbook.rig/1` (SI units, cables numbered from 1 in words, from 0 in the array).
 *
 * Only the shape: `checkRig` adds what makes the numbers a rig. Unknown fields are refused, because a mistyped
 * `motion` would otherwise quietly fix a jaw to the palm.
 */
export const rigFileSchema = z.strictObject({
  format: z.literal('tautbook.rig/1'),
  code: z.string().trim().min(1).max(80),
  title: z.string().trim().min(1).max(200),
  bodies: z.array(z.strictObject({ name: z.string().min(1).max(80), motion: z.discriminatedUnion('kind', [slideMotion, hingeMotion]).optional() })).min(1),
  /** `exit` [m] in base, `attach` [m] in palm at grasp 0, `body` names what carries the attachment. */
  cables: z.array(z.strictObject({ exit: vec3, attach: vec3, body: z.string() })),
  /** Range of the grasp coordinate: m for slide, rad for hinge. */
  grasp: z.strictObject({ kind: z.enum(['slide', 'hinge']), min: number, max: number }),
  /** N: what the controller keeps, what a cable may carry, below what it counts as slack. */
  tensionMin: number,
  tensionMax: number,
  slackBelow: number,
  /** N: modulus times cross-section, force per unit of strain. */
  axialStiffness: number,
  home: z.strictObject({ p: vec3, q: z.tuple([number, number, number, number]), grasp: number }),
  /** m, in base: the box that holds the rig. */
  frame: z.strictObject({ min: vec3, max: vec3 }),
});

export type RigFile = z.infer<typeof rigFileSchema>;
