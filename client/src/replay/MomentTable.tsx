/** The moment at the reading line as a table, for whoever cannot see the scene or wants the numbers. */
import { useEffect, useMemo, useState } from 'react';
import type { RigModel } from '@shared/rig/rig-model';
import { clock as clockText, degrees, fixed, millimetres, newtons } from '../lib/format';
import { cablesAt, handAt, stateWords } from './moment-words';
import type { Player } from './player';
import { emptyMoment } from './source';

/** Often enough to read along, seldom enough to be read, ms. */
const EVERY_MS = 250;

function useSlowMoment(player: Player): number {
  const [tick, setTick] = useState(0);
  useEffect(() => {
    let waiting: ReturnType<typeof setTimeout> | null = null;
    const soon = () => {
      waiting ??= setTimeout(() => {
        waiting = null;
        setTick((n) => n + 1);
      }, player.clock.state.playing ? EVERY_MS : 30);
    };
    const stops = [player.clock.onMoment(soon), player.source.onChange(soon), player.clock.onState(soon)];
    return () => {
      if (waiting) clearTimeout(waiting);
      for (const stop of stops) stop();
    };
  }, [player]);
  return tick;
}

const HEAD = 'text-left text-small font-medium text-soft pb-1 pr-4 border-b border-rule-strong';
const CELL = 'py-1 pr-4 border-b border-rule text-small';

export function MomentTable({ player, rig }: { player: Player; rig: RigModel }) {
  const tick = useSlowMoment(player);
  const { source, clock } = player;
  const shown = useMemo(() => {
    const wrench = new Float64Array(7);
    const moment = source.momentAt(clock.atS, emptyMoment(source.channels));
    return { tick, moment, hand: handAt(moment, source.channels, rig, wrench), wrench, cables: cablesAt(moment, source.channels, rig) };
  }, [tick, source, clock, rig]);
  const { moment, hand, cables, wrench } = shown;
  const value = (name: string) => moment.values[source.channels.names.indexOf(name)] ?? Number.NaN;
  return (
    <div className="px-6 max-sm:px-5 py-4 overflow-auto h-full" data-testid="moment-table">
      <h2 className="text-lead">The moment {clockText(clock.atS, 3)}</h2>
      <p className="text-small text-soft mb-3">
        {moment.known === 'gap' ? 'Nothing was recorded here.' : moment.known === 'outside' ? 'Outside the recording.' : moment.known === 'loading' ? 'Loading.' : moment.known === 'average' ? 'Averages; the samples are on their way.' : 'As recorded; force from tensions and pose.'}
      </p>
      <div className="grid gap-x-10 gap-y-5 lg:grid-cols-2">
        <table className="w-full border-collapse self-start">
          <caption className="sr-only">Hand at this moment</caption>
          <thead><tr><th scope="col" className={HEAD}>Hand</th><th scope="col" className={`${HEAD} text-right`}>Value</th></tr></thead>
          <tbody>
            {[
              ['x, y, z', ['x_m', 'y_m', 'z_m'].map((name) => fixed(value(name) * 1000, 1)).join('; ') + ' mm'],
              ['from home', hand ? millimetres(hand.fromHomeM, 1) : 'not measured'],
              ['turned from home', hand ? degrees(hand.turnedRad) : 'not measured'],
              ['grasp', !hand ? 'not measured' : rig.graspKind === 'slide' ? millimetres(hand.grasp, 1) : degrees(hand.grasp)],
              ['hand force', hand && Number.isFinite(hand.forceN) ? newtons(hand.forceN) : 'not measured'],
              ['force x, y, z', hand && Number.isFinite(hand.forceN) ? `${[0, 1, 2].map((i) => fixed(wrench[i] ?? Number.NaN, 1)).join('; ')} N` : 'not measured'],
            ].map(([name, text]) => (
              <tr key={name}><th scope="row" className={`${CELL} text-left font-normal`}>{name}</th><td className={`${CELL} text-right font-semibold`}>{text}</td></tr>
            ))}
          </tbody>
        </table>
        <table className="w-full border-collapse self-start">
          <caption className="sr-only">Cables at this moment</caption>
          <thead>
            <tr><th scope="col" className={HEAD}>Cable</th><th scope="col" className={`${HEAD} text-right`}>Tension</th><th scope="col" className={`${HEAD} text-right`}>Of the limit</th><th scope="col" className={HEAD}>State</th></tr>
          </thead>
          <tbody>
            {cables.map(({ cable, tensionN, state }) => (
              <tr key={cable}>
                <th scope="row" className={`${CELL} text-left font-bold`}>{cable}</th>
                <td className={`${CELL} text-right`}>{newtons(tensionN)}</td>
                <td className={`${CELL} text-right`}>{Number.isFinite(tensionN) ? `${fixed((tensionN / rig.tensionMax) * 100, 0)} %` : '–'}</td>
                <td className={`${CELL} ${state === 'slack' ? 'text-slack-text font-semibold' : state === 'saturated' ? 'text-saturated-text font-semibold' : state === 'near' ? 'text-near-text font-semibold' : ''}`}>{stateWords[state]}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
    </div>
  );
}
