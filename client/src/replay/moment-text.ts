/** Words of the player for moments, spans and speeds; figures come from lib/format. */
import { clock } from '../lib/format';

/** A span in as few figures as tell its ends apart: `0:13–0:25`, `0:02.60–0:02.92`. */
export function spanText(fromS: number, toS: number): string {
  const length = toS - fromS;
  const decimals = length >= 10 ? 0 : length >= 1 ? 1 : length >= 0.1 ? 2 : 3;
  return `${clock(fromS, decimals)}–${clock(toS, decimals)}`;
}

/** Speed as a reader says it. */
export function speedText(speed: number): string {
  if (speed === 1) return 'true speed';
  if (speed === 0.5) return '½ speed';
  return speed < 1 ? `1/${Math.round(1 / speed)} speed` : `${speed} × speed`;
}

/** For a voice: `1 min 13.4 s`. */
export function spokenMoment(atS: number): string {
  const minutes = Math.floor(atS / 60);
  const seconds = Math.round((atS - minutes * 60) * 1000) / 1000;
  return minutes > 0 ? `${minutes} min ${seconds} s` : `${seconds} s`;
}
