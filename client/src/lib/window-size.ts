import { useSyncExternalStore } from 'react';

function subscribe(listener: () => void): () => void {
  addEventListener('resize', listener);
  return () => removeEventListener('resize', listener);
}

/** Height of the window, CSS px. */
export const useWindowHeight = (): number => useSyncExternalStore(subscribe, () => innerHeight);

/** Width of the window, CSS px. */
export const useWindowWidth = (): number => useSyncExternalStore(subscribe, () => innerWidth);
