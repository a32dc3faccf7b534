import { useEffect, useMemo, useRef } from 'react';
import type { RigModel } from '@shared/rig/rig-model';
import { useWindowHeight, useWindowWidth } from '../../lib/window-size';
import { standardRibbons } from '../../replay/ribbons/ribbons';
import { Stave } from '../../replay/stave/Stave';
import type { StaveContent } from '../../replay/stave/stave-painter';
import type { LiveFlag, LivePlayer } from './live-trial';

const useStaveHeight = () => {
  const narrow = useWindowWidth() < 640;
  const height = useWindowHeight();
  return narrow ? 250 : Math.min(420, Math.max(280, height * 0.42));
};

interface LiveStaveProps {
  readonly player: LivePlayer;
  readonly rig: RigModel;
  readonly flags: readonly LiveFlag[];
  readonly number: number;
}

/** The last seconds of every cable, moving along with the trial. */
export function LiveStave({ player, rig, flags, number }: LiveStaveProps) {
  const { source } = player;
  const height = useStaveHeight();
  const narrow = useWindowWidth() < 640;
  const ribbons = useMemo(() => standardRibbons(source.channels, source.rateHz, rig).slice(0, narrow ? 2 : 3), [source, rig, narrow]);
  const content = useMemo<StaveContent>(() => ({ limits: rig, ribbons, flags, notes: [], selection: null, loop: null, litId: null }), [rig, ribbons, flags]);
  const frame = useRef<HTMLDivElement>(null);
  useEffect(() => {
    // For whoever measures how far the picture is behind: the newest sample that has been painted.
    const mark = () => requestAnimationFrame(() => {
      if (frame.current) frame.current.dataset['paintedS'] = source.newestS.toFixed(4);
    });
    return source.onChange(mark);
  }, [source]);
  return (
    <div ref={frame} data-testid="live-stave">
      <Stave live player={player} content={content} label={`The last seconds of trial ${number}: tension of every cable over its limit, grasp opening, hand speed, hand force`} height={height} />
    </div>
  );
}

/** Keeps the stave's place until the first sample comes. */
export function StaveAtRest({ cables }: { cables: number }) {
  const height = useStaveHeight();
  return (
    <div className="relative px-6 max-sm:px-5 py-4 flex flex-col" style={{ height }}>
      <div aria-hidden className="absolute inset-x-6 inset-y-8 flex flex-col justify-evenly max-sm:inset-x-5">
        {Array.from({ length: cables }, (_, i) => <div key={i} className="border-t border-rule" />)}
      </div>
      <p className="relative m-auto bg-paper px-4 py-1 text-soft text-center">The strings begin with the recording.</p>
    </div>
  );
}
