/** Ctrl-C and its relatives, for every command that runs until it is stopped. */

/**
 * ms. One Ctrl-C can reach a process twice: from the terminal, and passed on by the package runner that started it. What
 * comes within this time is the same one.
 */
const sameOneMs = 1_000;

/**
 * Calls `stop` at the first SIGINT, SIGTERM or SIGHUP. At the next one, people have lost patience: the process ends at once.
 */
export function onStopSignal(stop: () => void): void {
  let firstMs: number | null = null;
  const heard = () => {
    if (firstMs === null) {
      firstMs = performance.now();
      stop();
    } else if (performance.now() - firstMs > sameOneMs) process.exit(1);
  };
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, heard);
}
