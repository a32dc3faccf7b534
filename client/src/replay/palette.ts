/**
 * The theme's roles as values for canvas and scene, which cannot read CSS variables themselves. Read once per change
 * of the lamp, never per frame.
 */
import { useSyncExternalStore } from 'react';

const roles = {
  paper: '--paper',
  sheet: '--sheet',
  ink: '--ink',
  inkSoft: '--ink-soft',
  inkFaint: '--ink-faint',
  rule: '--rule',
  wash: '--wash',
  focus: '--focus',
  slack: '--slack',
  slackText: '--slack-text',
  near: '--near',
  nearText: '--near-text',
  saturated: '--saturated',
  saturatedText: '--saturated-text',
  confirmed: '--confirmed',
  gap: '--gap',
  string: '--string',
  stringDim: '--string-dim',
  frame: '--frame',
  floor: '--floor',
  palm: '--palm',
} as const;

export type PaletteRole = keyof typeof roles;
export type Palette = Readonly<Record<PaletteRole, string>>;

let current: Palette | null = null;
const listeners = new Set<() => void>();
let stopWatching: (() => void) | null = null;

function read(): Palette {
  const style = getComputedStyle(document.documentElement);
  return Object.fromEntries(Object.entries(roles).map(([role, variable]) => [role, style.getPropertyValue(variable).trim() || 'currentcolor'])) as Palette;
}

function watch(): () => void {
  const changed = () => {
    current = read();
    for (const listener of [...listeners]) listener();
  };
  const dark = matchMedia('(prefers-color-scheme: dark)');
  dark.addEventListener('change', changed);
  const byHand = new MutationObserver(changed);
  byHand.observe(document.documentElement, { attributes: true, attributeFilter: ['data-lamp'] });
  return () => {
    dark.removeEventListener('change', changed);
    byHand.disconnect();
  };
}

function subscribe(listener: () => void): () => void {
  listeners.add(listener);
  stopWatching ??= watch();
  return () => {
    listeners.delete(listener);
    if (listeners.size > 0) return;
    stopWatching?.();
    stopWatching = null;
    current = null;
  };
}

const snapshot = (): Palette => (current ??= read());

/** The palette of the present theme; the component renders again when the lamp changes. */
export const usePalette = (): Palette => useSyncExternalStore(subscribe, snapshot);
