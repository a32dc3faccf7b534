import { useEffect, useRef } from 'react';

/**
 * Takes the focus when the step before it took its button away, so that whoever runs a session by keyboard goes on with the
 * next key; leaves it where somebody is writing.
 */
export function useFocusOnce<E extends HTMLElement>() {
  const element = useRef<E>(null);
  useEffect(() => {
    const at = document.activeElement;
    if (at === null || at === document.body) element.current?.focus({ preventScroll: true });
  }, []);
  return element;
}
