import type { z } from 'zod';
import { cableLengths } from './kinematics/cable-lengths';
import { SHORTEST_CABLE, structureMatrix } from './kinematics/structure-matrix';
import { rigFileSchema, type RigFile } from './rig-file';
import { rigModel } from './rig-model';
import { placeWords, shapeWords } from './shape-words';
import { rankOf } from './statics/rank-of';

/** What can be wrong with a rig file. The codes are public: `calc` and the import page show them. */
export type RigFaultCode =
  | 'FORMAT'
  | 'MISSING'
  | 'TYPE'
  | 'UNKNOWN_FIELD'
  | 'BODY_UNKNOWN'
  | 'BODY_TWICE'
  | 'AXIS_NOT_UNIT'
  | 'QUATERNION_NOT_UNIT'
  | 'LIMITS_ORDER'
  | 'NEGATIVE'
  | 'TOO_FEW_CABLES'
  | 'CABLE_TWICE'
  | 'HOME_OUTSIDE'
  | 'ZERO_LENGTH_CABLE'
  | 'RANK_AT_HOME';

/** `path` leads to the field, dots between names and indices from 0, empty for the whole file; cables in `message` count from 1. */
export type RigFault = { code: RigFaultCode; path: string; message: string };

/** Norms may differ from 1 by this much, so that six written decimals are enough. No unit. */
const UNIT_TOLERANCE = 1e-5;
/** Seven coordinates need one cable more, because cables only pull. */
const FEWEST_CABLES = 8;

/**
 * All faults of a rig file, empty when it is sound.
 *
 * The shape comes first; what the numbers mean (limits, axes, rank at home) is looked at only when the shape is right.
 */
export function checkRig(input: unknown): RigFault[] {
  const parsed = rigFileSchema.safeParse(input);
  if (!parsed.success) return parsed.error.issues.flatMap(shapeFaults);
  const file = parsed.data;
  const faults = [...bodyFaults(file), ...cableFaults(file), ...limitFaults(file), ...homeFaults(file)];
  return faults.length > 0 ? faults : geometryFaults(file);
}

/** Faults of the pose `home`, not of the rig's numbers: kinematics still has answers at other poses. */
export function isFaultOfHome(fault: RigFault): boolean {
  return fault.code === 'ZERO_LENGTH_CABLE' || fault.code === 'RANK_AT_HOME';
}

function fault(code: RigFaultCode, path: string, message: string): RigFault {
  return { code, path, message };
}

function shapeFaults(issue: z.core.$ZodIssue): RigFault[] {
  const path = issue.path.map(String).join('.');
  const place = placeWords(issue.path);
  if (path === 'format') return [fault('FORMAT', path, 'format needs to be "tautbook.rig/1".')];
  if (issue.code === 'unrecognized_keys') {
    return issue.keys.map((key) => fault('UNKNOWN_FIELD', path === '' ? key : `${path}.${key}`, `${key} is not a field of ${place}. Check its spelling.`));
  }
  if (issue.code === 'invalid_type' && issue.input === undefined && /received undefined/.test(issue.message)) {
    return [fault('MISSING', path, `${place} is missing.`)];
  }
  return [fault('TYPE', path, `${place} ${shapeWords(issue)}.`)];
}

function bodyFaults(file: RigFile): RigFault[] {
  const seen = new Set<string>();
  return file.bodies.flatMap((body, i) => {
    const faults: RigFault[] = [];
    if (seen.has(body.name)) faults.push(fault('BODY_TWICE', `bodies.${i}.name`, `Two bodies are named ${body.name}. Give each its own name.`));
    seen.add(body.name);
    const norm = body.motion === undefined ? 1 : Math.hypot(...body.motion.axis);
    if (Math.abs(norm - 1) > UNIT_TOLERANCE) {
      faults.push(fault('AXIS_NOT_UNIT', `bodies.${i}.motion.axis`, `The axis of ${body.name} has length ${norm}; it needs to be 1.`));
    }
    return faults;
  });
}

function cableFaults(file: RigFile): RigFault[] {
  const names = new Set(file.bodies.map((body) => body.name));
  const faults: RigFault[] = [];
  if (file.cables.length < FEWEST_CABLES) {
    faults.push(fault('TOO_FEW_CABLES', 'cables', `Seven coordinates need at least ${FEWEST_CABLES} cables; there are ${file.cables.length}.`));
  }
  const seen = new Map<string, number>();
  file.cables.forEach((cable, i) => {
    if (!names.has(cable.body)) {
      faults.push(fault('BODY_UNKNOWN', `cables.${i}.body`, `Cable ${i + 1} is attached to ${cable.body}, which is not among the bodies.`));
    }
    const key = JSON.stringify([cable.exit, cable.attach, cable.body]);
    const twin = seen.get(key);
    if (twin !== undefined) faults.push(fault('CABLE_TWICE', `cables.${i}`, `Cable ${i + 1} repeats cable ${twin + 1}.`));
    seen.set(key, twin ?? i);
  });
  return faults;
}

function limitFaults(file: RigFile): RigFault[] {
  const faults: RigFault[] = [];
  const order = (path: string, right: boolean, rule: string) => {
    if (!right) faults.push(fault('LIMITS_ORDER', path, rule));
  };
  if (file.slackBelow < 0) faults.push(fault('NEGATIVE', 'slackBelow', 'slackBelow is a tension and cannot be below zero.'));
  if (!(file.axialStiffness > 0)) faults.push(fault('NEGATIVE', 'axialStiffness', 'axialStiffness needs to be above zero.'));
  order('slackBelow', file.slackBelow <= file.tensionMin, 'slackBelow needs to be at or below tensionMin.');
  order('tensionMax', file.tensionMin < file.tensionMax, 'tensionMax needs to be above tensionMin.');
  order('grasp.max', file.grasp.min < file.grasp.max, 'grasp.max needs to be above grasp.min.');
  for (const axis of [0, 1, 2] as const) {
    order(`frame.max.${axis}`, file.frame.min[axis] < file.frame.max[axis], `frame.max needs to be above frame.min along ${'xyz'[axis]}.`);
  }
  return faults;
}

function homeFaults(file: RigFile): RigFault[] {
  const faults: RigFault[] = [];
  const { home, frame, grasp } = file;
  const norm = Math.hypot(...home.q);
  if (Math.abs(norm - 1) > UNIT_TOLERANCE) faults.push(fault('QUATERNION_NOT_UNIT', 'home.q', `The quaternion of home has norm ${norm}; it needs to be 1.`));
  if (home.grasp < grasp.min || home.grasp > grasp.max) faults.push(fault('HOME_OUTSIDE', 'home.grasp', 'The grasp of home is outside the range of the grasp.'));
  home.p.forEach((value, axis) => {
    if (value < frame.min[axis]! || value > frame.max[axis]!) {
      faults.push(fault('HOME_OUTSIDE', `home.p.${axis}`, `home is outside the frame along ${'xyz'[axis]}.`));
    }
  });
  return faults;
}

function geometryFaults(file: RigFile): RigFault[] {
  const rig = rigModel(file);
  const n = rig.cableCount;
  const size = Math.max(...file.frame.max.map((value, axis) => value - file.frame.min[axis]!));
  const lengths = cableLengths(rig, rig.home, new Float64Array(n));
  const zero = [...lengths].flatMap((length, i) =>
    length > SHORTEST_CABLE * size ? [] : [fault('ZERO_LENGTH_CABLE', `cables.${i}`, `Cable ${i + 1} has no length at home: its attachment sits on its exit.`)],
  );
  if (zero.length > 0) return zero;
  const rank = rankOf(structureMatrix(rig, rig.home, new Float64Array(7 * n)), n);
  if (rank === 7) return [];
  return [fault('RANK_AT_HOME', '', `At home the cables act on ${rank} of 7 coordinates. Some motion of palm or grasp leaves all lengths unchanged.`)];
}
