import { lazy } from 'react';
import type { RigFile } from '@shared/rig/rig-file';
import { PanelBoundary } from '../../ui/PanelBoundary';

/** The scene brings three dimensions' worth of code: fetched when a rig is looked at. */
const RigScene = lazy(async () => ({ default: (await import('../../replay/scene/RigScene')).RigScene }));

/** The rig in three dimensions. The table beside it says the same in numbers, for whoever cannot see the scene. */
export function RigView({ file }: { file: RigFile }) {
  return (
    <figure className="min-w-0">
      <div className="h-[26rem] max-sm:h-72 bg-sheet border-y border-rule">
        <PanelBoundary waiting={<p role="status" className="p-4 text-small text-soft">Drawing the rig</p>}>
          <RigScene file={file} />
        </PanelBoundary>
      </div>
      <figcaption className="text-small text-soft mt-1.5">Frame, exits (numbered as the cables) and palm at home.</figcaption>
    </figure>
  );
}
