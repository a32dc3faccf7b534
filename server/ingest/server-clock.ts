/** Server's wall clock in µs since 1970: the time the process started plus a clock that never jumps. */
export const serverUs = (): number => (performance.timeOrigin + performance.now()) * 1000;
