/** A flag as a line of the margin. */
import type { Flag } from '@shared/api/sessions';
import { duration, millimetres, newtons } from '../../lib/format';
import { FLAG_WORDS } from '../../lib/words';

/** Text colour of a kind that has one of its own. */
export const flagTone: Partial<Record<Flag['kind'], string>> = { slack: 'text-slack-text', saturation: 'text-saturated-text', 'near-limit': 'text-near-text' };

/** "Slack, cable 4". */
export const flagHead = (flag: Pick<Flag, 'kind' | 'cable'>): string => (flag.cable === null ? FLAG_WORDS[flag.kind] : `${FLAG_WORDS[flag.kind]}, cable ${flag.cable}`);

/** "for 0.33 s, down to 0.16 N". */
export function flagDetail(flag: Pick<Flag, 'kind' | 'startS' | 'endS' | 'peak'>): string {
  const lasts = `for ${duration(flag.endS - flag.startS)}`;
  if (flag.peak === null) return lasts;
  switch (flag.kind) {
    case 'slack':
    case 'drop':
      return `${lasts}, down to ${newtons(flag.peak)}`;
    case 'saturation':
    case 'near-limit':
      return `${lasts} at ${newtons(flag.peak)}`;
    case 'slip':
      return `the length steps by ${millimetres(flag.peak, 1)}, ${lasts}`;
    default:
      return lasts;
  }
}
