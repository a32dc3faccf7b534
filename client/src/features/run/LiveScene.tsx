import { useState } from 'react';
import type { RigRevision } from '@shared/api/rigs';
import type { RigModel } from '@shared/rig/rig-model';
import { Button } from '../../ui/Button';
import { LazyScene } from '../../replay/LazyScene';
import { MomentTable } from '../../replay/MomentTable';
import type { Player } from '../../replay/player';
import type { CameraName } from '../../replay/scene/cameras';
import { SceneWords } from '../../replay/SceneWords';

/** The rig as it is now, or the same in figures. */
export function LiveScene({ revision, rig, player }: { revision: RigRevision; rig: RigModel; player: Player }) {
  const [camera, setCamera] = useState<CameraName>('free');
  const [table, setTable] = useState(false);
  const instead = 'The stave below and the table of the moment show the same.';
  return (
    <>
      {table ? <MomentTable player={player} rig={rig} /> : (
        <>
          <LazyScene file={revision.file} player={player} camera={camera} onCamera={setCamera} label={`${revision.title} as it is now, in three dimensions. ${instead}`} instead={instead} />
          <SceneWords player={player} rig={rig} title={`${revision.title.split(',')[0] ?? revision.title}, revision ${revision.revision}`} />
        </>
      )}
      <div className="absolute right-6 max-sm:right-5 bottom-2">
        <Button tone="faint" aria-pressed={table} onClick={() => setTable(!table)}>{table ? 'scene' : 'table'}</Button>
      </div>
    </>
  );
}
