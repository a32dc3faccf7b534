import { describe, expect, test } from 'vitest';
import { clock, counted, degrees, duration, fixed, microseconds, millimetres, newtons, visitWords, wallTime } from '@client/lib/format';

describe('numbers and times as a reader meets them', () => {
  test.each([
    [0, 3, '0:00.000'], [13.4, 3, '0:13.400'], [59.9999, 3, '0:59.999'], [60, 1, '1:00.0'], [3599.96, 1, '59:59.9'], [0.3, 1, '0:00.3'], [75, 0, '1:15'], [-0.25, 2, '−0:00.25'],
  ] as const)('the clock cuts and never shows a moment that has not come: %d s', (seconds, decimals, text) => expect(clock(seconds, decimals)).toBe(text));

  test('a value that was not measured is words, never NaN', () => {
    for (const text of [newtons(Number.NaN), millimetres(Number.NaN), degrees(Number.NaN), duration(Number.NaN), fixed(Number.POSITIVE_INFINITY, 1)]) expect(text).toBe('not measured');
    expect(clock(Number.NaN)).not.toContain('NaN');
  });

  test('lengths of time change their unit where a reader would', () => {
    expect(duration(0.333)).toBe('0.33\u00a0s');
    expect(duration(58)).toBe('58.0\u00a0s');
    expect(duration(252)).toBe('4\u00a0min\u00a012\u00a0s');
    expect(duration(3720)).toBe('1\u00a0h\u00a002\u00a0min');
  });

  test('a number never parts from its unit at the end of a line', () => {
    for (const text of [newtons(12.4), millimetres(0.0004), duration(41), duration(252), duration(3720), microseconds(210)]) expect(text).not.toContain(' ');
  });

  test('a full turn is 360 degrees, and a minus is a minus sign, but never before zero', () => {
    expect(degrees(2 * Math.PI)).toBe('360.0°');
    expect(fixed(-1.25, 1)).toMatch(/^\u22121\.[23]$/);
    expect(fixed(-0.0001, 1)).toBe('0.0');
  });

  test('offsets of clocks keep three meaningful digits from µs to s', () => {
    expect(microseconds(210)).toBe('210\u00a0µs');
    expect(microseconds(-1532)).toBe('−1.53\u00a0ms');
    expect(microseconds(12_000_000)).toBe('12.0\u00a0s');
  });

  test('one is singular, everything else plural', () => expect([0, 1, 2].map((n) => counted(n, 'trial'))).toEqual(['0 trials', '1 trial', '2 trials']));

  test('visits are ordinals as far as ordinals read well', () => expect([visitWords(3), visitWords(12)]).toEqual(['third visit', 'visit 12']));

  test('wall time says today on the day itself', () => {
    const now = new Date(2026, 4, 14, 12, 0);
    expect(wallTime(new Date(2026, 4, 14, 9, 30).toISOString(), now)).toBe('today, 09:30');
    expect(wallTime(new Date(2025, 4, 14, 9, 30).toISOString(), now)).toContain('2025');
  });
});
