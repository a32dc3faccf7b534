import type { RigFile } from '@shared/rig/rig-file';
import { RigScene } from '../../replay/LazyScene';

/** The rig in three dimensions. The table beside it says the same in numbers, for whoever cannot see the scene. */
export function RigView({ file }: { file: RigFile }) {
  return (
    <figure className="min-w-0">
      <div className="h-[26rem] max-sm:h-72 bg-sheet border-y border-rule">
        <RigScene file={file} />
      </div>
      <figcaption className="text-small text-soft mt-1.5">Frame, exits (numbered as the cables) and palm at home.</figcaption>
    </figure>
  );
}
