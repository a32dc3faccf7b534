/** The scene's code (three.js) comes when a scene is first shown; until then the page keeps its place. */
import { lazy } from 'react';
import { PanelBoundary } from '../ui/PanelBoundary';
import type { ReplaySceneProps } from './scene/ReplayScene';

const Scene = lazy(async () => ({ default: (await import('./scene/ReplayScene')).ReplayScene }));

export function LazyScene(props: ReplaySceneProps) {
  return (
    <PanelBoundary waiting={<p role="status" className="p-6 text-small text-soft">Setting up the scene</p>}>
      <Scene {...props} />
    </PanelBoundary>
  );
}
