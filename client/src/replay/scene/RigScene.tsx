/** A rig at rest, for its page: frame, exits, cables, palm and jaws at home. */
import { useEffect, useState } from 'react';
import type { RigFile } from '@shared/rig/rig-file';
import type { CameraName } from './cameras';
import { CameraChoice } from './CameraChoice';
import { makeRigStage } from './rig-stage';
import { SceneCanvas } from './SceneCanvas';

const never = () => () => undefined;

export function RigScene({ file }: { file: RigFile }) {
  return <RigAtHome key={`${file.code} ${JSON.stringify(file.cables)}`} file={file} />;
}

function RigAtHome({ file }: { file: RigFile }) {
  const [stage] = useState(() => {
    const made = makeRigStage(file);
    made.setPose(file.home, []);
    return made;
  });
  const [camera, setCamera] = useState<CameraName>('free');
  useEffect(() => () => stage.dispose(), [stage]);
  return (
    <div className="relative size-full">
      <SceneCanvas
        stage={stage}
        camera={camera}
        onFree={() => setCamera('free')}
        onPose={never}
        label={`${file.title}: frame with ${file.cables.length} numbered exits, cables, palm and jaws at home`}
        instead="The table gives every exit and attachment in numbers."
      />
      <CameraChoice camera={camera} onChange={setCamera} offered={['free', 'front', 'side', 'top']} />
    </div>
  );
}
