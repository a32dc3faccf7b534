import type { Moment } from '@shared/api/review';
import { clock, wallDay } from '../../lib/format';
import { FlagMark } from '../../replay/FlagMark';
import { classNames } from '../../ui/class-names';
import { flagDetail, flagHead, flagTone } from '../trial';
import { STATE_WORDS, stateOfMoment } from './filters';
import { Strip } from './Strip';

const TONES = { open: 'text-soft', confirmed: 'text-confirmed-text font-semibold', dismissed: 'text-ink font-semibold', unsure: 'text-ink font-semibold' } as const;

interface MomentRowProps {
  readonly moment: Moment;
  readonly number: number;
  readonly here: boolean;
  readonly marked: boolean;
  readonly pending: boolean;
  readonly narrow: boolean;
}

/** One moment: what it is, where, its strip of the stave, and how it stands. */
export function MomentRow({ moment, number, here, marked, pending, narrow }: MomentRowProps) {
  const state = stateOfMoment(moment);
  const { verdict } = moment;
  return (
    <div className={classNames('h-full border-b border-rule border-l-4 px-3 grid items-center gap-x-5 grid-cols-[2.5rem_minmax(0,19rem)_minmax(0,1fr)_11rem] max-lg:grid-cols-[2rem_minmax(0,1fr)_auto]', here ? 'bg-sheet border-l-ink' : 'border-l-transparent')}>
      <span className="text-small text-soft text-right">{marked ? <b className="text-ink" aria-hidden>marked</b> : number}</span>
      <span className="min-w-0">
        <span className="block lg:truncate">
          <FlagMark kind={moment.kind} className="inline-block mr-2 align-[-2px]" />
          <b className={classNames(flagTone[moment.kind])}>{flagHead(moment)}</b> <span className="text-soft">{flagDetail(moment)}</span>
        </span>
        <span className="block truncate text-small text-soft">{moment.participantCode}, visit {moment.visit}, trial {moment.trialNumber}, {clock(moment.startS, 1)} · {moment.condition.label ?? `condition ${moment.condition.blindCode}`} · {wallDay(moment.plannedAt)}</span>
      </span>
      <span className={classNames('min-w-0', 'max-lg:order-last max-lg:col-span-3')}><Strip moment={moment} height={narrow ? 48 : 60} /></span>
      <span className="min-w-0 text-small text-right max-lg:max-w-48">
        <span className={TONES[state]}>{pending ? 'being written' : STATE_WORDS[state]}</span>
        {verdict && state !== 'open' ? <span className="block truncate text-soft max-sm:hidden">{verdict.by.name}{verdict.reason === '' ? '' : `: ${verdict.reason}`}</span> : null}
      </span>
    </div>
  );
}
