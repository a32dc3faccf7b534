/** Who reads this trial now, where their lines stand, and what they write, as it comes. */
import { useQueryClient } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import type { PersonRef, TrialId } from '@shared/api/common';
import type { LiveFromServer } from '@shared/api/live';
import { tellReading, useRoom, type RoomState } from '../../lib/live';
import type { Clock } from '../../replay/clock';
import type { OtherReader } from '../../replay/stave/draw-reading';
import { initials } from './initials';
import { flagsQuery, placeNote, trialQuery } from './queries';

export interface ReadingRoom {
  readonly state: RoomState;
  readonly present: readonly PersonRef[];
  readonly others: readonly OtherReader[];
  /** The last note that somebody else wrote, for the voice. */
  readonly news: string;
}

/** How often one's own line is told to the others, ms. */
const TELL_EVERY_MS = 120;

export function useReadingRoom(trialId: TrialId, clock: Clock | null, myId: string): ReadingRoom {
  const queries = useQueryClient();
  const room = `trial:${trialId}`;
  const [present, setPresent] = useState<readonly PersonRef[]>([]);
  const [lines, setLines] = useState<ReadonlyMap<string, OtherReader>>(new Map());
  const [news, setNews] = useState('');

  const onMessage = (message: LiveFromServer) => {
    switch (message.type) {
      case 'joined':
      case 'present':
        setPresent(message.present);
        break;
      case 'reading': {
        const { who, atS } = message;
        if (who.id !== myId) setLines((known) => new Map(known).set(who.id, { id: who.id, initials: initials(who.name), atS }));
        break;
      }
      case 'note':
        placeNote(queries, trialId, message.note);
        if (message.note.author.id !== myId) setNews(`A note of ${message.note.author.name} came in.`);
        break;
      case 'verdicts':
      case 'found':
        void queries.invalidateQueries({ queryKey: flagsQuery(trialId).queryKey });
        break;
      case 'trial':
        void queries.invalidateQueries({ queryKey: trialQuery(trialId).queryKey });
        break;
      default:
        break;
    }
  };
  const state = useRoom(room, onMessage);

  useEffect(() => {
    if (!clock || state !== 'joined') return;
    let waiting: ReturnType<typeof setTimeout> | null = null;
    const tell = () => {
      waiting ??= setTimeout(() => {
        waiting = null;
        tellReading(room, Math.max(0, clock.atS));
      }, TELL_EVERY_MS);
    };
    tell();
    const stop = clock.onMoment(tell);
    return () => {
      stop();
      if (waiting) clearTimeout(waiting);
    };
  }, [clock, room, state]);

  const here = new Set(present.map((person) => person.id as string));
  return { state, present, others: [...lines.values()].filter((line) => here.has(line.id)), news };
}
