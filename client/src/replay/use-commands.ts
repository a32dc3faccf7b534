/** Runs the player's commands from the keyboard of the whole page, except while somebody types or a dialog is open. */
import { useEffect, useEffectEvent, useSyncExternalStore } from 'react';
import { commandFor, isSingleKey, type CommandId } from './commands';

const KEY = 'tautbook.single-keys';
const listeners = new Set<() => void>();
let remembered: boolean | null = null;

function read(): boolean {
  try {
    return localStorage.getItem(KEY) !== 'off';
  } catch {
    return true;
  }
}

/** Whether single letters run commands; kept in this browser. */
export const singleKeys = {
  get: (): boolean => (remembered ??= read()),
  set(on: boolean): void {
    remembered = on;
    try {
      localStorage.setItem(KEY, on ? 'on' : 'off');
    } catch {
      // Storage is closed to this page: the choice holds until the page is left.
    }
    for (const listener of listeners) listener();
  },
};

export const useSingleKeys = (): boolean =>
  useSyncExternalStore((listener) => {
    listeners.add(listener);
    return () => listeners.delete(listener);
  }, singleKeys.get);

/** @returns false when nothing was done, so that the key keeps its ordinary meaning */
export type RunCommand = (id: CommandId) => boolean;

export function useCommands(run: RunCommand): void {
  const onKey = useEffectEvent((event: KeyboardEvent) => {
    if (event.defaultPrevented || typing(event.target)) return;
    const command = commandFor(event);
    if (!command) return;
    // Inside a tab list, a menu or on a button, arrows, Space and the like belong to that control.
    const control = event.target instanceof Element && event.target.closest('button, a, [role="tab"], [role="menuitem"], summary, select');
    if (control && event.key.length > 1 && event.key !== 'Escape') return;
    if (control && event.key === ' ') return;
    const onStave = event.target instanceof Element && event.target.closest('[role="slider"]') !== null;
    if (isSingleKey(command) && !onStave && !singleKeys.get()) return;
    if (run(command.id)) event.preventDefault();
  });
  useEffect(() => {
    const listen = (event: KeyboardEvent) => onKey(event);
    document.addEventListener('keydown', listen);
    return () => document.removeEventListener('keydown', listen);
  }, []);
}

function typing(target: EventTarget | null): boolean {
  if (!(target instanceof HTMLElement)) return false;
  if (target.closest('[role="dialog"], [role="alertdialog"]')) return true;
  return target.isContentEditable || target instanceof HTMLTextAreaElement || (target instanceof HTMLInputElement && !['checkbox', 'radio', 'button'].includes(target.type));
}
