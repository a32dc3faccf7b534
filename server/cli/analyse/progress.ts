/** A line of progress on standard error, for a person at a terminal; silent otherwise. */
const width = 30;

export function progressLine(stream: NodeJS.WriteStream): { show(share: number): void; clear(): void } {
  if (!stream.isTTY) return { show: () => undefined, clear: () => undefined };
  let shown = -1;
  return {
    show(share) {
      const percent = Math.min(100, Math.floor(share * 100));
      if (percent === shown) return;
      shown = percent;
      const filled = Math.round((percent / 100) * width);
      stream.write(`\r${'='.repeat(filled)}${'.'.repeat(width - filled)} ${percent} %`);
    },
    clear: () => void stream.write(`\r${' '.repeat(width + 7)}\r`),
  };
}
