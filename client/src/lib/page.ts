import type { ComponentType } from 'react';
import type { RouteObject } from 'react-router-dom';

/**
 * A page whose code is fetched when it is first turned to; an empty path is the index of its parent.
 *
 * The function form of `lazy`, because the router empties the object form once it was used: a second router made
 * from the same routes would find nothing.
 */
export function page(path: string, fetchPage: () => Promise<ComponentType>): RouteObject {
  const lazy = async () => ({ Component: await fetchPage() });
  return path === '' ? { index: true, lazy } : { path, lazy };
}
