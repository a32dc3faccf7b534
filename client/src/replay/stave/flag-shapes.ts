/**
 * The shape of each kind of flag, drawn on a square of 12 with its middle at 0, 0; the same path on the stave, in the
 * lists and on the sheet of signs. A kind is told by its shape first and by its colour second.
 */
import type { FlagKind } from '@shared/api/sessions';
import type { PaletteRole } from '../palette';

export interface FlagShape {
  /** SVG path data. */
  readonly path: string;
  readonly filled: boolean;
  readonly role: PaletteRole;
  /** For text of that meaning (4.5:1 on paper). */
  readonly textRole: PaletteRole;
}

export const flagShapes: Readonly<Record<FlagKind, FlagShape>> = {
  // A cord that hangs.
  slack: { path: 'M-5.5 -3C-3.5 4.5 3.5 4.5 5.5 -3', filled: false, role: 'slack', textRole: 'slackText' },
  // A bar between two caps, as on the string.
  saturation: { path: 'M-5.5 -5h2v2.2h7v-2.2h2v10h-2v-2.2h-7v2.2h-2z', filled: true, role: 'saturated', textRole: 'saturatedText' },
  // The same bar, still hollow.
  'near-limit': { path: 'M-5 -4.5v9M5 -4.5v9M-5 -2h10M-5 2h10', filled: false, role: 'near', textRole: 'nearText' },
  // Two strokes of the hatch.
  gap: { path: 'M-5 5L-1 -5M1 5L5 -5', filled: false, role: 'gap', textRole: 'inkFaint' },
  // A step that stays.
  slip: { path: 'M-5.5 4H-0.5V-4H5.5', filled: false, role: 'ink', textRole: 'ink' },
  // A shake.
  oscillation: { path: 'M-6 0L-4 -4L-1.5 4L1.5 -4L4 4L6 0', filled: false, role: 'ink', textRole: 'ink' },
  // A ring that is left.
  unreachable: { path: 'M2.5 -4.2A4.8 4.8 0 1 0 2.5 4.2M-1 0H6M3.5 -2.5L6 0L3.5 2.5', filled: false, role: 'ink', textRole: 'ink' },
  // Energy that comes out.
  active: { path: 'M0 -5.5L5 4.5H-5Z', filled: false, role: 'ink', textRole: 'ink' },
  // Something fell.
  drop: { path: 'M0 -5.5V4M-4 0.5L0 5L4 0.5', filled: false, role: 'ink', textRole: 'ink' },
};
