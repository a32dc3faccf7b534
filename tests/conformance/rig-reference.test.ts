/**
 * Independent values (numpy and scipy; see `source` and `how` inside each file) for the rig mathematics, held to the
 * tolerance that each file states.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import {
  cableLengths,
  closure,
  distributeTensions,
  forwardKinematics,
  lengthRates,
  parseRig,
  structureMatrix,
  twistFromLengthRates,
  wrenchFromTensions,
  type Pose,
  type RigModel,
} from '@shared/rig';
import { largestDifference, reference } from './rig-reference';

const rigs = new Map<string, RigModel>();
function rigNamed(name: string): RigModel {
  const known = rigs.get(name);
  if (known) return known;
  const rig = parseRig(JSON.parse(readFileSync(new URL(`../../samples/rigs/${name}.json`, import.meta.url), 'utf8')));
  rigs.set(name, rig);
  return rig;
}

type Kinematics = { rig: string; pose: Pose; lengths: number[]; A: number[][]; n: number[]; rank: number; closure: boolean; closureIndex: number };
type Degenerate = { what: string; rig: unknown; pose: Pose; rank: number; closure: boolean };

describe('kinematics.json', () => {
  const file = reference<{ tolerance: Record<'lengths' | 'A' | 'n' | 'closureIndex', number>; cases: Kinematics[]; degenerate: Degenerate[] }>('kinematics');

  it.each(file.cases.map((one, k) => [k, one.rig, one] as const))('case %i (%s): lengths, structure matrix, null vector, closure', (_, name, one) => {
    const rig = rigNamed(name);
    expect(largestDifference(cableLengths(rig, one.pose, new Float64Array(8)), one.lengths)).toBeLessThanOrEqual(file.tolerance.lengths);
    expect(largestDifference(structureMatrix(rig, one.pose, new Float64Array(56)), one.A.flat())).toBeLessThanOrEqual(file.tolerance.A);
    const found = closure(rig, one.pose);
    expect(found.rank).toBe(one.rank);
    expect(found.closure).toBe(one.closure);
    expect(largestDifference(found.n!, one.n)).toBeLessThanOrEqual(file.tolerance.n);
    expect(Math.abs(found.closureIndex! - one.closureIndex)).toBeLessThanOrEqual(file.tolerance.closureIndex);
  });

  it.each(file.degenerate.map((one) => [one.what, one] as const))('a rig of lower rank says so: %s', (_, one) => {
    const found = closure(parseRig(one.rig), one.pose);
    expect(found).toEqual({ rank: one.rank, n: null, closure: one.closure, closureIndex: null });
  });
});

type Statics = {
  rig: string;
  pose: Pose;
  wrench: number[];
  tensionMin: number;
  tensionMax: number;
  feasible: boolean;
  tensions: number[];
  activeLimits: { cable: number; limit: string }[];
};

describe('statics.json', () => {
  const file = reference<{ tolerance: { tensions: number; residual: number }; cases: Statics[] }>('statics');

  it.each(file.cases.map((one, k) => [k, one.rig, one] as const))('case %i (%s): tensions within limits or infeasible', (_, name, one) => {
    const rig = rigNamed(name);
    const found = distributeTensions(rig, one.pose, one.wrench, one);
    expect(found.feasible).toBe(one.feasible);
    if (!found.feasible) {
      expect(found.shortBy).toBeGreaterThan(0);
      return;
    }
    expect(largestDifference(found.tensions, one.tensions)).toBeLessThanOrEqual(file.tolerance.tensions);
    expect(found.activeLimits).toEqual(one.activeLimits);
    const balanced = wrenchFromTensions(rig, one.pose, found.tensions, new Float64Array(7));
    expect(largestDifference(balanced, one.wrench)).toBeLessThanOrEqual(file.tolerance.residual);
  });
});

type Forward = { rig: string; lengths: number[]; start: Pose; pose: Pose; residualRms: number };

describe('forward.json', () => {
  const file = reference<{ tolerance: Record<'p' | 'q' | 'grasp' | 'residualRms', number>; cases: Forward[] }>('forward');

  it.each(file.cases.map((one, k) => [k, one.rig, one] as const))('case %i (%s): lengths to pose', (_, name, one) => {
    const found = forwardKinematics(rigNamed(name), one.lengths, one.start);
    expect(found.converged).toBe(true);
    expect(largestDifference(found.pose.p, one.pose.p)).toBeLessThanOrEqual(file.tolerance.p);
    expect(largestDifference(found.pose.q, one.pose.q)).toBeLessThanOrEqual(file.tolerance.q);
    expect(Math.abs(found.pose.grasp - one.pose.grasp)).toBeLessThanOrEqual(file.tolerance.grasp);
    expect(Math.abs(found.residualRms - one.residualRms)).toBeLessThanOrEqual(file.tolerance.residualRms);
  });
});

type Velocity = { rig: string; pose: Pose; twist: number[]; lengthRates: number[]; tensions: number[]; powerFromCables: number };

describe('velocity.json', () => {
  const file = reference<{ tolerance: { lengthRates: number; twist: number }; cases: Velocity[] }>('velocity');

  it.each(file.cases.map((one, k) => [k, one.rig, one] as const))('case %i (%s): twist to cable speeds, back, and the power of both', (_, name, one) => {
    const rig = rigNamed(name);
    const rates = lengthRates(rig, one.pose, one.twist, new Float64Array(8));
    expect(largestDifference(rates, one.lengthRates)).toBeLessThanOrEqual(file.tolerance.lengthRates);
    expect(largestDifference(twistFromLengthRates(rig, one.pose, rates), one.twist)).toBeLessThanOrEqual(file.tolerance.twist);
    const wrench = wrenchFromTensions(rig, one.pose, one.tensions, new Float64Array(7));
    const power = -wrench.reduce((sum, value, row) => sum + value * one.twist[row]!, 0);
    expect(Math.abs(power - one.powerFromCables)).toBeLessThanOrEqual(1e-12 * Math.max(1, Math.abs(power)));
  });
});
