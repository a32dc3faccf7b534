/** A device's own monotonic clock, µs: it starts anywhere and runs a little fast or slow. */
export interface DeviceClock {
  nowUs(): number;
}

/**
 * @param offsetUs what the clock shows when it is made
 * @param driftPpm how much faster it runs than the machine's, millionths
 */
export function createDeviceClock(offsetUs: number, driftPpm: number, nowMs: () => number = () => performance.now()): DeviceClock {
  const started = nowMs();
  const rate = 1000 * (1 + driftPpm * 1e-6);
  return { nowUs: () => offsetUs + (nowMs() - started) * rate };
}
