/** The scene of a player: one moment of the rig in three dimensions, drawn again when the clock or the data move. */
import { useThree } from '@react-three/fiber';
import { useCallback, useEffect, useState } from 'react';
import type { RigFile } from '@shared/rig/rig-file';
import { rigModel } from '@shared/rig/rig-model';
import type { Player } from '../player';
import { CameraChoice } from './CameraChoice';
import type { CameraName } from './cameras';
import { makeRigStage, type RigStage } from './rig-stage';
import { SceneCanvas } from './SceneCanvas';
import { createStageDriver } from './stage-driver';
import { webglHere } from './webgl-here';

export interface ReplaySceneProps {
  readonly file: RigFile;
  readonly player: Player;
  readonly camera: CameraName;
  readonly onCamera: (camera: CameraName) => void;
  readonly label: string;
  readonly instead: string;
}

export function ReplayScene({ file, player, camera, onCamera, label, instead }: ReplaySceneProps) {
  const [stage] = useState(() => makeRigStage(file));
  const [poseListeners] = useState(() => new Set<() => void>());
  const onPose = useCallback((listener: () => void) => {
    poseListeners.add(listener);
    return () => {
      poseListeners.delete(listener);
    };
  }, [poseListeners]);
  useEffect(() => () => stage.dispose(), [stage]);
  return (
    <div className="relative size-full">
      <SceneCanvas stage={stage} camera={camera} onFree={() => onCamera('free')} onPose={onPose} label={label} instead={instead} headed>
        <Drive stage={stage} file={file} player={player} poseListeners={poseListeners} />
      </SceneCanvas>
      <CameraChoice camera={camera} onChange={onCamera} />
    </div>
  );
}

/** A processor that draws by itself has other work too: the stave comes first. */
const SOFTWARE_EVERY_MS = 80;

/** Inside the canvas, because only there a frame can be asked for. */
function Drive({ stage, file, player, poseListeners }: { stage: RigStage; file: RigFile; player: Player; poseListeners: Set<() => void> }) {
  const invalidate = useThree((state) => state.invalidate);
  const everyMs = webglHere() === 'software' ? SOFTWARE_EVERY_MS : 0;
  useEffect(() => {
    const drive = createStageDriver(stage, player.source, rigModel(file));
    let drawnMs = -Infinity;
    let later: ReturnType<typeof setTimeout> | undefined;
    const draw = () => {
      clearTimeout(later);
      later = undefined;
      drawnMs = performance.now();
      drive(player.clock.atS);
      for (const listener of poseListeners) listener();
      invalidate();
    };
    // At once when the last picture is old enough, else when it will be: the newest moment is always drawn in the end.
    const now = () => {
      const waitMs = everyMs - (performance.now() - drawnMs);
      if (waitMs <= 0) draw();
      else later ??= setTimeout(draw, waitMs);
    };
    draw();
    const stops = [player.clock.onMoment(now), player.source.onChange(now)];
    return () => {
      clearTimeout(later);
      for (const stop of stops) stop();
    };
  }, [stage, file, player, poseListeners, invalidate, everyMs]);
  return null;
}
