/** The worklist of a study's flags: judged one after another from the keyboard, most of them without opening the trial. */
import { useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { useVirtualizer } from '@tanstack/react-virtual';
import { useEffect, useMemo, useRef, useState, type KeyboardEvent } from 'react';
import { useNavigate, useParams, useSearchParams } from 'react-router-dom';
import { studyId as studyIdSchema } from '@shared/api/common';
import type { Moment } from '@shared/api/review';
import type { VerdictValue } from '@shared/api/verdict';
import { count, counted } from '../../lib/format';
import { idFromPath } from '../../lib/id-from-path';
import { useRoom } from '../../lib/live';
import { useWindowWidth } from '../../lib/window-size';
import { Crumbs } from '../../ui/bar-slots';
import { Empty } from '../../ui/Empty';
import { PageTitle } from '../../ui/Page';
import { studyQuery } from '../studies';
import { FilterLine } from './FilterLine';
import { filters, shownMoments, stateOfMoment } from './filters';
import { JudgeBar } from './JudgeBar';
import { MomentRow } from './MomentRow';
import { momentsQuery } from './queries';
import { useJudging } from './use-judging';

const KEYS: Readonly<Record<string, VerdictValue>> = { y: 'confirmed', x: 'dismissed', u: 'unsure' };
const noFilters = Object.fromEntries(filters.map(({ name }) => [name, null]));
const none: ReadonlySet<string> = new Set();
const optionId = (moment: Moment) => `moment-${moment.id}`;

export function TriagePage() {
  const studyId = idFromPath(studyIdSchema, useParams()['studyId']);
  const study = useSuspenseQuery(studyQuery(studyId)).data;
  const moments = useSuspenseQuery(momentsQuery(studyId)).data;
  const queries = useQueryClient();
  const navigate = useNavigate();
  const [query, setQuery] = useSearchParams();
  const narrow = useWindowWidth() < 1024;
  const judging = useJudging(studyId);
  const mayJudge = study.myRole === 'lead';

  /** Judged while this list was open: they stay in it until another list is asked for. */
  const [kept, setKept] = useState(none);
  const [marked, setMarked] = useState(none);
  const [hereId, setHereId] = useState<string | null>(query.get('here'));
  const [reason, setReason] = useState('');
  const list = useRef<HTMLDivElement>(null);
  const reasonField = useRef<HTMLInputElement>(null);

  const shown = useMemo(() => shownMoments(moments, query, kept), [moments, query, kept]);
  const found = shown.findIndex(({ id }) => id === hereId);
  const here = shown.length === 0 ? -1 : Math.max(0, found);
  const settled = useMemo(() => moments.filter((moment) => stateOfMoment(moment) !== 'open').length, [moments]);
  const rows = useVirtualizer({ count: shown.length, getScrollElement: () => list.current, estimateSize: () => (narrow ? 156 : 84), overscan: 6 });

  useRoom(`study:${studyId}`, (message) => {
    if (message.type === 'verdicts') void queries.invalidateQueries({ queryKey: momentsQuery(studyId).queryKey });
  });
  useEffect(() => rows.measure(), [rows, narrow]);
  useEffect(() => list.current?.focus({ preventScroll: true }), []);

  const goTo = (index: number) => {
    const next = shown[Math.max(0, Math.min(shown.length - 1, index))];
    if (!next) return;
    setHereId(next.id);
    rows.scrollToIndex(shown.indexOf(next), { align: 'auto' });
  };
  const mark = (index: number, on?: boolean) => {
    const moment = shown[index];
    if (!moment) return;
    setMarked((before) => {
      const next = new Set(before);
      if (on ?? !next.has(moment.id)) next.add(moment.id);
      else next.delete(moment.id);
      return next;
    });
  };
  const judge = async (value: VerdictValue) => {
    const chosen = marked.size > 0 ? shown.filter(({ id }) => marked.has(id)) : here >= 0 ? shown.slice(here, here + 1) : [];
    if (!mayJudge || chosen.length === 0 || chosen.some(({ id }) => judging.pending.has(id))) return;
    const said = reason;
    setKept((before) => new Set([...before, ...chosen.map(({ id }) => id)]));
    setMarked(none);
    setReason('');
    if (chosen.length === 1) {
      const nextOpen = shown.findIndex((moment, i) => i > here && stateOfMoment(moment) === 'open');
      goTo(nextOpen >= 0 ? nextOpen : here + 1);
    }
    if (await judging.judge(chosen, value, said)) return;
    // Refused: the words come back, and so does the place.
    setReason((typed) => (typed === '' ? said : typed));
    setHereId(chosen[0]?.id ?? null);
  };
  const takeBack = () => void judging.takeBack(moments);
  const open = () => {
    const moment = shown[here];
    if (moment) void navigate(`/trials/${moment.trialId}?at=${moment.startS.toFixed(3)}`);
  };
  const choose = (changes: Readonly<Record<string, string | null>>) => {
    setKept(none);
    setMarked(none);
    setQuery((before) => {
      const next = new URLSearchParams(before);
      for (const [name, value] of Object.entries(changes)) {
        if (value === null) next.delete(name);
        else next.set(name, value);
      }
      return next;
    }, { replace: true });
  };

  const onKeyDown = (event: KeyboardEvent) => {
    if (event.ctrlKey || event.altKey || event.metaKey) return;
    const key = event.key.length === 1 ? event.key.toLowerCase() : event.key;
    const value = KEYS[key];
    if (value) void judge(value);
    else if (key === 'ArrowDown' || key === 'j') {
      if (event.shiftKey && key === 'ArrowDown') {
        mark(here, true);
        mark(here + 1, true);
      }
      goTo(here + 1);
    } else if (key === 'ArrowUp' || key === 'k') {
      if (event.shiftKey && key === 'ArrowUp') {
        mark(here, true);
        mark(here - 1, true);
      }
      goTo(here - 1);
    } else if (key === 'PageDown') goTo(here + 6);
    else if (key === 'PageUp') goTo(here - 6);
    else if (key === 'Home') goTo(0);
    else if (key === 'End') goTo(shown.length - 1);
    else if (key === ' ') mark(here);
    else if (key === 'Escape') setMarked(none);
    else if (key === 'r' && mayJudge) reasonField.current?.focus();
    else if (key === 'o' || key === 'Enter') open();
    else if (key === 'z' && mayJudge) takeBack();
    else return;
    event.preventDefault();
  };

  const current = shown[here];
  return (
    <div className="flex flex-col h-[calc(100dvh-3.3125rem)] max-md:h-[calc(100dvh-5.5rem)] min-h-[30rem]">
      <title>{`Moments to settle, ${study.title} · Tautbook`}</title>
      <Crumbs steps={[{ to: '/studies', name: 'Studies' }, { to: `/studies/${studyId}`, name: study.title }]} here="Moments" />
      <header className="px-6 max-sm:px-4 pt-5 max-sm:pt-3">
        <div className="flex flex-wrap items-baseline justify-between gap-x-8 max-sm:[&_h1]:text-lead">
          <PageTitle>Moments to settle</PageTitle>
          <p role="status" className="text-small text-soft">{count(settled)} of {counted(moments.length, 'moment')} settled <progress className="accent-ink h-1.5 w-28 ml-2" aria-label="Settled" max={Math.max(1, moments.length)} value={settled} /></p>
        </div>
        <div className="mt-2"><FilterLine moments={moments} query={query} onChange={choose} /></div>
      </header>
      <div
        ref={list}
        role="listbox"
        tabIndex={0}
        aria-label="Moments of this study"
        aria-multiselectable
        aria-activedescendant={current ? optionId(current) : undefined}
        onKeyDown={onKeyDown}
        className="flex-1 min-h-0 overflow-auto px-3 max-sm:px-0 outline-offset-[-1px] focus-visible:outline-1"
      >
        {shown.length === 0 ? null : (
          <div className="relative" style={{ height: rows.getTotalSize() }}>
            {rows.getVirtualItems().map((item) => {
              const moment = shown[item.index];
              if (!moment) return null;
              return (
                <div
                  key={moment.id}
                  id={optionId(moment)}
                  role="option"
                  aria-selected={marked.has(moment.id)}
                  aria-setsize={shown.length}
                  aria-posinset={item.index + 1}
                  onClick={() => setHereId(moment.id)}
                  onDoubleClick={open}
                  className="absolute inset-x-0 top-0 cursor-default"
                  style={{ height: item.size, transform: `translateY(${item.start}px)` }}
                >
                  <MomentRow moment={moment} number={item.index + 1} here={item.index === here} marked={marked.has(moment.id)} pending={judging.pending.has(moment.id)} narrow={narrow} />
                </div>
              );
            })}
          </div>
        )}
      </div>
      {shown.length === 0 ? (
        <div className="px-6 max-sm:px-4 pb-6 flex-1">
          {moments.length === 0 ? <Empty title="No moments yet">Flags appear here once trials of this study are recorded and looked through.</Empty> : (
            <Empty title="No moment fits" action={<button type="button" className="link" onClick={() => choose(noFilters)}>Show all {count(moments.length)}</button>}>Nothing in this study has all that was chosen above.</Empty>
          )}
        </div>
      ) : null}
      <JudgeBar
        mayJudge={mayJudge}
        empty={here < 0}
        marked={marked.size}
        undoable={judging.done > 0}
        reason={reason}
        onReason={setReason}
        reasonField={reasonField}
        onReasonDone={() => list.current?.focus()}
        onJudge={(value) => void judge(value)}
        onOpen={open}
        onTakeBack={takeBack}
        onUnmark={() => setMarked(none)}
        error={judging.error}
      />
    </div>
  );
}
