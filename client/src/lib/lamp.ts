/** The reading lamp: on is paper, off is dark, system follows the computer. Kept in this browser only. */
export type Lamp = 'system' | 'on' | 'off';

/** Also read by public/lamp.js before the first paint. */
const KEY = 'tautbook.lamp';

export function readLamp(): Lamp {
  const set = document.documentElement.dataset['lamp'];
  return set === 'on' || set === 'off' ? set : 'system';
}

export function setLamp(lamp: Lamp): void {
  if (lamp === 'system') delete document.documentElement.dataset['lamp'];
  else document.documentElement.dataset['lamp'] = lamp;
  try {
    if (lamp === 'system') localStorage.removeItem(KEY);
    else localStorage.setItem(KEY, lamp);
  } catch {
    // Storage is closed to this page: the choice holds until the page is left.
  }
}
