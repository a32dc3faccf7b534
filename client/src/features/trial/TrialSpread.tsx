/** The open spread: scene on the left page, margin on the right, the stave across the foot, one clock for all. */
import { useQuery } from '@tanstack/react-query';
import { useEffect, useMemo, useState } from 'react';
import { useLocation } from 'react-router-dom';
import type { RigRevision } from '@shared/api/rigs';
import type { JudgedFlag, RecordingMeta, Trial } from '@shared/api/sessions';
import { rigModel } from '@shared/rig/rig-model';
import { useWindowHeight, useWindowWidth } from '../../lib/window-size';
import { useMe } from '../../lib/me';
import { PageTitle } from '../../ui/Page';
import { ClockBar } from '../../replay/ClockBar';
import type { CommandId } from '../../replay/commands';
import { KeysSheet } from '../../replay/KeysSheet';
import { LazyScene } from '../../replay/LazyScene';
import { MomentTable } from '../../replay/MomentTable';
import { createPlayer } from '../../replay/player';
import { nextMoment, runPlayerCommand } from '../../replay/player-commands';
import { recordingSource, shapeOf } from '../../replay/recording-source';
import { standardRibbons } from '../../replay/ribbons/ribbons';
import type { CameraName } from '../../replay/scene/cameras';
import { SceneWords } from '../../replay/SceneWords';
import { spanText } from '../../replay/moment-text';
import { lengthOf, spanBetween, type Span } from '../../replay/span';
import { Stave } from '../../replay/stave/Stave';
import type { StaveContent } from '../../replay/stave/stave-painter';
import { useCommands } from '../../replay/use-commands';
import { Button } from '../../ui/Button';
import { initials } from './initials';
import { Leafing } from './Leafing';
import { Margin } from './Margin';
import { NewNote, type NotePlace } from './NewNote';
import { readPlace, viewAround } from './place-in-address';
import { PresentReaders } from './PresentReaders';
import { flagsQuery, notesQuery } from './queries';
import { RecordingRemarks } from './RecordingRemarks';
import { useHere } from './use-here';
import { VerdictDialog } from './VerdictDialog';
import { usePlaceInAddress } from './use-place-in-address';
import { useReadingRoom } from './use-reading-room';

interface TrialSpreadProps {
  readonly trial: Trial;
  readonly recording: RecordingMeta;
  readonly revision: RigRevision;
  readonly title: string;
}

const noFlags: readonly JudgedFlag[] = [];

export function TrialSpread({ trial, recording, revision, title }: TrialSpreadProps) {
  const me = useMe();
  const { search } = useLocation();
  const [opened] = useState(() => open(recording, revision, search));
  const { source, player, place } = opened;
  const { clock, view } = player;
  const rig = useMemo(() => rigModel(revision.file), [revision]);
  const narrow = useWindowWidth() < 640;
  const windowHeight = useWindowHeight();
  const ribbons = useMemo(() => standardRibbons(source.channels, source.rateHz, rig).slice(0, narrow ? 2 : 3), [source, rig, narrow]);

  const flagList = useQuery(flagsQuery(trial.id));
  const noteList = useQuery(notesQuery(trial.id));
  const flags = flagList.data?.flags ?? noFlags;
  const notes = useMemo(() => noteList.data ?? [], [noteList.data]);
  const room = useReadingRoom(trial.id, clock, me.id);

  const [selection, setSelection] = useState<Span | null>(place.span);
  const [writing, setWriting] = useState<NotePlace | null>(null);
  const [camera, setCamera] = useState<CameraName>('free');
  const [judgingId, setJudgingId] = useState<string | null>(null);
  const [litId, setLitId] = useState<string | null>(null);
  const [sheet, setSheet] = useState(false);
  const [table, setTable] = useState(false);
  const [loop, setLoop] = useState<Span | null>(null);

  useEffect(() => player.start(), [player]);
  useEffect(() => source.grow(shapeOf(recording, source.channels)), [source, recording]);
  usePlaceInAddress(clock, selection);

  const entries = useMemo(() => [...flags, ...notes].map(({ id, startS, endS }) => ({ id, startS, endS })), [flags, notes]);
  const hereIds = useHere(clock, entries);
  const content = useMemo<StaveContent>(() => ({
    limits: rig,
    ribbons,
    flags,
    notes: notes.map((note) => ({ id: note.id, startS: note.startS, endS: note.endS, cables: note.cables, initials: initials(note.author.name), text: note.text, resolved: note.resolved !== null })),
    selection: writing ? placeSpan(writing) : selection,
    loop,
    litId,
  }), [rig, ribbons, flags, notes, selection, writing, loop, litId]);

  const goTo = (startS: number, endS: number | null) => {
    clock.pause();
    clock.seek(startS);
    // Far out, a short flag is a speck: step closer until it has a shape.
    const length = Math.max((endS ?? startS) - startS, 0.02);
    if (lengthOf(view.span) > length * 400) view.set({ fromS: startS - length * 20, toS: startS + length * 40 });
    view.reveal(startS, 0.3);
  };
  const setLooped = (span: Span | null) => {
    clock.setLoop(span);
    setLoop(clock.state.loop);
  };
  const write = (at: NotePlace = { startS: selection?.fromS ?? clock.atS, endS: selection?.toS ?? null, cables: [] }) => {
    if (!trial.may.note) return;
    clock.pause();
    setWriting(at);
  };
  const goNext = (moments: readonly { startS: number; endS: number | null }[], direction: 1 | -1) => {
    const atS = nextMoment(moments.map(({ startS }) => startS), clock.atS, direction);
    const moment = moments.find(({ startS }) => startS === atS);
    if (moment) goTo(moment.startS, moment.endS);
  };

  const run = (id: CommandId): boolean => {
    if (id.startsWith('camera-')) {
      setCamera(id.slice('camera-'.length) as CameraName);
      return true;
    }
    switch (id) {
      case 'next-flag':
      case 'previous-flag':
        goNext(flags, id === 'next-flag' ? 1 : -1);
        return true;
      case 'next-note':
      case 'previous-note':
        goNext(notes, id === 'next-note' ? 1 : -1);
        return true;
      case 'span-start':
        setSelection(spanBetween(clock.atS, Math.max(selection?.toS ?? 0, clock.atS + lengthOf(view.span) / 20)));
        return true;
      case 'span-end':
        setSelection(spanBetween(Math.min(selection?.fromS ?? Infinity, clock.atS - lengthOf(view.span) / 20), clock.atS));
        return true;
      case 'span-clear':
        if (!selection && !loop) return false;
        setSelection(null);
        setLooped(null);
        return true;
      case 'loop':
        setLooped(loop ? null : selection);
        return true;
      case 'note':
        write();
        return true;
      case 'table':
        setTable((shown) => !shown);
        return true;
      case 'keys':
        setSheet(true);
        return true;
      default:
        return runPlayerCommand(player, id);
    }
  };
  useCommands(run);

  const showEntry = (ids: readonly string[], list: readonly { id: string; startS: number; endS: number | null }[]) => {
    const entry = list.find(({ id }) => id === ids[0]);
    if (!entry) return;
    // A pile opens by stepping closer; one alone is gone to.
    if (ids.length > 1) {
      const piled = list.filter(({ id }) => ids.includes(id));
      const [fromS, toS] = [Math.min(...piled.map((one) => one.startS)), Math.max(...piled.map((one) => one.startS))];
      const around = Math.max((toS - fromS) * 0.3, 0.1);
      view.set({ fromS: fromS - around, toS: toS + around });
      return;
    }
    goTo(entry.startS, entry.endS);
    document.querySelector(`[id$="${entry.id}"]`)?.scrollIntoView({ block: 'nearest' });
  };

  const judged = flags.find(({ id }) => id === judgingId);
  const instead = 'The stave below and the table of the moment (key T) show the same.';
  const staveHeight = narrow ? 300 : Math.min(440, Math.max(300, windowHeight * 0.45));
  return (
    <div className="flex flex-col md:h-[calc(100dvh-3.3125rem)] md:min-h-[44rem]">
      <title>{`${title} · Tautbook`}</title>
      <div className="md:flex-1 md:min-h-0 md:grid md:grid-cols-[minmax(0,62fr)_minmax(0,38fr)]">
        <section aria-label="Scene" className="relative bg-sheet h-[21rem] md:h-auto min-h-0 overflow-hidden">
          {table ? <MomentTable player={player} rig={rig} /> : (
            <>
              <LazyScene file={revision.file} player={player} camera={camera} onCamera={setCamera} label={`${revision.title} at the reading line, in three dimensions. ${instead}`} instead={instead} />
              <SceneWords player={player} rig={rig} title={`${revision.title.split(',')[0] ?? revision.title}, revision ${revision.revision}`} />
            </>
          )}
        </section>
        <aside aria-label="Margin of the trial" className="margin-rule min-h-0 flex flex-col">
          <div className="flex items-baseline justify-between gap-4 px-6 max-sm:px-5 pt-3 [&_h1]:text-lead [&_h1]:tracking-normal">
            <PageTitle>{title}</PageTitle>
            <Leafing trial={trial} />
          </div>
          <RecordingRemarks trial={trial} recording={recording} source={source} complaint={place.complaint} gaps={recording.gaps.length} />
          <div className="flex-1 min-h-0">
            <Margin
              trialId={trial.id}
              flags={flags}
              flagState={flagList.data?.state ?? 'loading'}
              notes={noteList.data ?? null}
              error={noteList.error ?? flagList.error}
              onRetry={() => void Promise.all([noteList.refetch(), flagList.refetch()])}
              mayNote={trial.may.note}
              myId={me.id}
              hereIds={hereIds}
              onGo={goTo}
              onLight={setLitId}
              onWrite={() => write()}
              onJudgeFlag={trial.may.judge ? (flag) => setJudgingId(flag.id) : null}
              onNoteFlag={(flag) => write({ startS: flag.startS, endS: flag.endS > flag.startS ? flag.endS : null, cables: flag.cable === null ? [] : [flag.cable] })}
              writing={writing ? <NewNote key={`${writing.startS} ${writing.endS}`} trialId={trial.id} place={writing} cableCount={rig.cableCount} onPlace={setWriting} onDone={() => { setWriting(null); setSelection(null); }} onCancel={() => setWriting(null)} /> : null}
            />
          </div>
        </aside>
      </div>
      <section aria-label="Stave" className="sticky bottom-0 z-10 bg-paper border-t border-rule-strong">
        <Stave
          player={player}
          content={content}
          label="Reading position on the stave"
          others={room.others}
          height={staveHeight}
          onSelect={setSelection}
          onFlag={(ids) => showEntry(ids, flags)}
          onNote={(ids) => showEntry(ids, notes)}
        />
        <ClockBar clock={clock} run={run} selection={selection} flags={flags.length} notes={notes.length}>
          {selection ? (
            <span className="flex flex-wrap items-baseline gap-x-4 text-small">
              <span className="font-semibold">span {spanText(selection.fromS, selection.toS)}</span>
              {trial.may.note ? <Button tone="faint" onClick={() => write()}>note on it</Button> : null}
              <Button tone="faint" onClick={() => run('span-clear')}>let go</Button>
            </span>
          ) : null}
        </ClockBar>
      </section>
      <PresentReaders present={room.present} myId={me.id} state={room.state} />
      <p role="status" className="sr-only">{room.news}</p>
      {judged ? <VerdictDialog key={judged.id} studyId={trial.session.studyId} trialId={trial.id} flag={judged} myId={me.id} onClose={() => setJudgingId(null)} /> : null}
      {sheet ? <KeysSheet onClose={() => setSheet(false)} /> : null}
    </div>
  );
}

const placeSpan = ({ startS, endS }: NotePlace): Span | null => (endS === null ? null : { fromS: startS, toS: endS });

function open(recording: RecordingMeta, revision: RigRevision, search: string) {
  const source = recordingSource(recording, revision.cableCount);
  if (!source) throw new Error('The page asks first whether the recording fits the rig.');
  const extent = source.extent();
  const place = readPlace(search, extent);
  const player = createPlayer(source, { atS: place.atS ?? undefined, span: place.span ? viewAround(place.span, extent) : undefined });
  return { source, player, place };
}
