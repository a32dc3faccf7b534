/** The scene's own words: where the hand is and what it feels. Written past React, a few times a second. */
import { useEffect, useRef } from 'react';
import { closure } from '@shared/rig/statics/closure';
import type { RigModel } from '@shared/rig/rig-model';
import { degrees, fixed, millimetres, newtons } from '../lib/format';
import { handAt } from './moment-words';
import type { Player } from './player';
import { poseOf } from './ribbons/hand-force';
import { emptyMoment } from './source';

/** ms */
const EVERY_MS = 100;

export function SceneWords({ player, rig, title }: { player: Player; rig: RigModel; title: string }) {
  const where = useRef<HTMLParagraphElement>(null);
  const index = useRef<HTMLElement>(null);
  const force = useRef<HTMLElement>(null);
  useEffect(() => {
    const { source, clock } = player;
    const moment = emptyMoment(source.channels);
    const wrench = new Float64Array(7);
    let waiting: ReturnType<typeof setTimeout> | null = null;
    const write = () => {
      waiting = null;
      source.momentAt(clock.atS, moment);
      const hand = handAt(moment, source.channels, rig, wrench);
      const pose = poseOf((channel) => moment.values[channel] ?? Number.NaN, source.channels);
      if (where.current) {
        where.current.textContent = hand
          ? `palm ${millimetres(hand.fromHomeM, 0)} from home, turned ${degrees(hand.turnedRad)}, grasp ${rig.graspKind === 'slide' ? millimetres(hand.grasp, 0) : degrees(hand.grasp, 0)}`
          : moment.known === 'gap' ? 'nothing was recorded here' : moment.known === 'loading' ? 'loading' : 'the hand was not measured';
      }
      if (index.current) index.current.textContent = pose ? closureText(rig, pose) : '–';
      if (force.current) force.current.textContent = hand && Number.isFinite(hand.forceN) ? newtons(hand.forceN) : '–';
    };
    const soon = () => {
      waiting ??= setTimeout(write, EVERY_MS);
    };
    write();
    const stops = [clock.onMoment(soon), source.onChange(soon)];
    return () => {
      if (waiting) clearTimeout(waiting);
      for (const stop of stops) stop();
    };
  }, [player, rig]);
  return (
    <div className="pointer-events-none absolute inset-x-0 top-0 px-6 max-sm:px-5 pt-3 flex flex-wrap justify-between gap-x-6 gap-y-0.5 text-small">
      <div>
        <p className="font-semibold">{title}</p>
        <p ref={where} className="text-soft" />
      </div>
      <dl className="text-right max-sm:text-left max-sm:flex max-sm:gap-x-4">
        <div><dt className="inline text-soft">closure index</dt> <dd ref={index} className="inline font-bold" /></div>
        <div><dt className="inline text-soft">hand force</dt> <dd ref={force} className="inline font-bold" /></div>
      </dl>
    </div>
  );
}

function closureText(rig: RigModel, pose: NonNullable<ReturnType<typeof poseOf>>): string {
  const found = closure(rig, pose);
  return found.closureIndex === null ? 'none' : fixed(found.closureIndex, 2);
}
