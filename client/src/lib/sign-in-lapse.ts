/** True while the reader's sign-in has ended under a page that is still open. Outside React: calls learn of it first. */
import { useSyncExternalStore } from 'react';

let lapsed = false;
const listeners = new Set<() => void>();

export const signInLapse = {
  set(value: boolean): void {
    if (lapsed === value) return;
    lapsed = value;
    for (const listener of listeners) listener();
  },
  get: (): boolean => lapsed,
  subscribe(listener: () => void): () => void {
    listeners.add(listener);
    return () => listeners.delete(listener);
  },
};

export const useSignInLapse = (): boolean => useSyncExternalStore(signInLapse.subscribe, signInLapse.get);
