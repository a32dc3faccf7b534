/** The canvas around a rig's stage: draws on demand only, in the colours of the lamp, and says so where it cannot draw. */
import { Canvas, useThree } from '@react-three/fiber';
import { useEffect, useRef, useState, type ReactNode } from 'react';
import { usePalette } from '../palette';
import { CameraRig } from './CameraRig';
import { FIELD_OF_VIEW, type CameraName } from './cameras';
import type { RigStage } from './rig-stage';
import { webglHere } from './webgl-here';

export interface SceneCanvasProps {
  readonly stage: RigStage;
  readonly camera: CameraName;
  readonly onFree: () => void;
  readonly onPose: (listener: () => void) => () => void;
  /** What a voice says of the picture. */
  readonly label: string;
  /** Where the same can be read without the picture. */
  readonly instead: string;
  /** Words stand over the head of the picture. */
  readonly headed?: boolean;
  readonly children?: ReactNode;
}

export function SceneCanvas({ stage, camera, onFree, onPose, label, instead, headed = false, children }: SceneCanvasProps) {
  const [webgl] = useState(webglHere);
  if (webgl === 'none') {
    return (
      <p role="status" className="p-6 text-small text-soft max-w-[34rem]">
        This browser cannot draw in three dimensions (WebGL 2 is missing or switched off). {instead}
      </p>
    );
  }
  return (
    <div role="img" aria-label={label} className="size-full" data-testid="scene">
      <Canvas
        frameloop="demand"
        flat
        shadows="percentage"
        dpr={webgl === 'software' ? 1 : [1, 2]}
        camera={{ fov: FIELD_OF_VIEW, near: 0.01, far: 20 }}
        gl={{ antialias: true, powerPreference: 'high-performance' }}
      >
        <Stage stage={stage} />
        <CameraRig stage={stage} camera={camera} onFree={onFree} onPose={onPose} headed={headed} />
        {children}
      </Canvas>
    </div>
  );
}

function Stage({ stage }: { stage: RigStage }) {
  const palette = usePalette();
  const { scene, invalidate } = useThree();
  const drawn = useRef(false);
  useEffect(() => {
    stage.setPalette(palette, scene);
    invalidate();
    if (drawn.current) return;
    drawn.current = true;
    // The numbers are drawn again once the face has come.
    void document.fonts.ready.then(() => {
      stage.setPalette(palette, scene);
      invalidate();
    });
  }, [stage, palette, scene, invalidate]);
  return <primitive object={stage.group} dispose={null} />;
}
