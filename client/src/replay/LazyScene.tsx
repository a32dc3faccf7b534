/** The scene's code (three.js) comes when a scene is first shown; until then the page keeps its place. */
import { lazy } from 'react';
import type { RigFile } from '@shared/rig/rig-file';
import { PanelBoundary } from '../ui/PanelBoundary';
import type { ReplaySceneProps } from './scene/ReplayScene';

const Scene = lazy(async () => ({ default: (await import('./scene/ReplayScene')).ReplayScene }));

const AtHome = lazy(async () => ({ default: (await import('./scene/RigScene')).RigScene }));

export function LazyScene(props: ReplaySceneProps) {
  return (
    <PanelBoundary waiting={<p role="status" className="p-6 text-small text-soft">Setting up the scene</p>}>
      <Scene {...props} />
    </PanelBoundary>
  );
}

/** A rig at home, without a recording. */
export function RigScene({ file }: { file: RigFile }) {
  return (
    <PanelBoundary waiting={<p role="status" className="p-6 text-small text-soft">Setting up the scene</p>}>
      <AtHome file={file} />
    </PanelBoundary>
  );
}
