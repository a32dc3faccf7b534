/**
 * Every command of the player with its keys, in one table: the keyboard, the sheet of keys and the tests read it.
 * Keys are `KeyboardEvent.key`; `shift+` is written out for keys that have no sign of their own.
 */
export type CommandId =
  | 'toggle' | 'sample-back' | 'sample-on' | 'step-back' | 'step-on' | 'second-back' | 'second-on' | 'page-back' | 'page-on' | 'start' | 'end'
  | 'next-flag' | 'previous-flag' | 'next-note' | 'previous-note' | 'slower' | 'faster' | 'true-speed' | 'loop'
  | 'closer' | 'further' | 'whole' | 'to-line'
  | 'span-start' | 'span-end' | 'span-clear' | 'note' | 'table' | 'keys'
  | 'camera-free' | 'camera-front' | 'camera-side' | 'camera-top' | 'camera-hand';

export interface Command {
  readonly id: CommandId;
  readonly keys: readonly string[];
  readonly says: string;
  readonly group: 'Time' | 'Moments' | 'Page' | 'Span and notes' | 'Scene';
}

export const commands: readonly Command[] = [
  { id: 'toggle', keys: [' '], says: 'play or pause', group: 'Time' },
  { id: 'sample-back', keys: [','], says: 'one sample back', group: 'Time' },
  { id: 'sample-on', keys: ['.'], says: 'one sample on', group: 'Time' },
  { id: 'step-back', keys: ['ArrowLeft'], says: '10 ms back', group: 'Time' },
  { id: 'step-on', keys: ['ArrowRight'], says: '10 ms on', group: 'Time' },
  { id: 'second-back', keys: ['shift+ArrowLeft'], says: '1 s back', group: 'Time' },
  { id: 'second-on', keys: ['shift+ArrowRight'], says: '1 s on', group: 'Time' },
  { id: 'page-back', keys: ['PageUp'], says: 'one page back', group: 'Time' },
  { id: 'page-on', keys: ['PageDown'], says: 'one page on', group: 'Time' },
  { id: 'start', keys: ['Home'], says: 'to the start', group: 'Time' },
  { id: 'end', keys: ['End'], says: 'to the end', group: 'Time' },
  { id: 'slower', keys: ['w'], says: 'slower (walk)', group: 'Time' },
  { id: 'faster', keys: ['r'], says: 'faster (run)', group: 'Time' },
  { id: 'true-speed', keys: ['o'], says: 'true speed', group: 'Time' },
  { id: 'next-flag', keys: ['f'], says: 'next flag', group: 'Moments' },
  { id: 'previous-flag', keys: ['F'], says: 'flag before', group: 'Moments' },
  { id: 'next-note', keys: ['g'], says: 'next note', group: 'Moments' },
  { id: 'previous-note', keys: ['G'], says: 'note before', group: 'Moments' },
  { id: 'closer', keys: ['+', '='], says: 'closer, about the reading line', group: 'Page' },
  { id: 'further', keys: ['-'], says: 'further away', group: 'Page' },
  { id: 'whole', keys: ['0'], says: 'the whole recording', group: 'Page' },
  { id: 'to-line', keys: ['c'], says: 'bring the reading line to the middle', group: 'Page' },
  { id: 'span-start', keys: ['['], says: 'span begins at the line', group: 'Span and notes' },
  { id: 'span-end', keys: [']'], says: 'span ends at the line', group: 'Span and notes' },
  { id: 'span-clear', keys: ['Escape'], says: 'let the span go', group: 'Span and notes' },
  { id: 'loop', keys: ['l'], says: 'loop the span, or end the loop', group: 'Span and notes' },
  { id: 'note', keys: ['n'], says: 'write a note here or on the span', group: 'Span and notes' },
  { id: 'camera-free', keys: ['1'], says: 'look from where you like', group: 'Scene' },
  { id: 'camera-front', keys: ['2'], says: 'from the front', group: 'Scene' },
  { id: 'camera-side', keys: ['3'], says: 'from the side', group: 'Scene' },
  { id: 'camera-top', keys: ['4'], says: 'from the top', group: 'Scene' },
  { id: 'camera-hand', keys: ['5'], says: 'with the hand', group: 'Scene' },
  { id: 'table', keys: ['t'], says: 'this moment as a table', group: 'Scene' },
  { id: 'keys', keys: ['?'], says: 'this sheet', group: 'Page' },
];

const byKey = new Map(commands.flatMap((command) => command.keys.map((key) => [key, command] as const)));

interface Pressed {
  readonly key: string;
  readonly shiftKey: boolean;
  readonly ctrlKey: boolean;
  readonly altKey: boolean;
  readonly metaKey: boolean;
}

/** The command that a key press asks for; the browser's own combinations are left alone. */
export function commandFor({ key, shiftKey, ctrlKey, altKey, metaKey }: Pressed): Command | null {
  if (ctrlKey || altKey || metaKey) return null;
  const named = key.length > 1;
  return byKey.get(named && shiftKey ? `shift+${key}` : key) ?? null;
}

/** A single letter or sign, which WCAG 2.2 (2.1.4) wants to be switchable. */
export const isSingleKey = (command: Command): boolean => command.keys.every((key) => key.length === 1 && key !== ' ');

/** What is printed on the key, in letters: the page's face has no arrows. */
export function keyWords(key: string): string {
  const words: Readonly<Record<string, string>> = {
    ' ': 'Space', ArrowLeft: 'Left', ArrowRight: 'Right', 'shift+ArrowLeft': 'Shift Left', 'shift+ArrowRight': 'Shift Right', PageUp: 'Page Up', PageDown: 'Page Down',
    Home: 'Home', End: 'End', Escape: 'Esc',
  };
  const known = words[key];
  if (known !== undefined) return known;
  return key.length === 1 && key !== key.toLowerCase() ? `Shift ${key}` : key.toUpperCase();
}
