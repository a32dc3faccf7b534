import type { PersonRef } from '@shared/api/common';
import type { RoomState } from '../../lib/live';
import { BarEnd } from '../../ui/bar-slots';
import { initials } from './initials';

/** Who else has this trial open, at the end of the bar; and a word when the live line is down. */
export function PresentReaders({ present, myId, state }: { present: readonly PersonRef[]; myId: string; state: RoomState }) {
  const others = present.filter((person) => person.id !== myId);
  if (state === 'broken') return <BarEnd><p role="status" className="text-small text-soft">live line down, trying again</p></BarEnd>;
  if (others.length === 0) return null;
  return (
    <BarEnd>
      <div className="flex items-center gap-x-2 text-small text-soft">
        <span id="reading-together" className="max-sm:hidden">reading together</span>
        <ul aria-label="Reading together" className="flex gap-x-1.5">
          {others.slice(0, 5).map((person) => (
            <li key={person.id} title={person.name} className="size-7 grid place-items-center rounded-full border border-slack-text text-slack-text text-fine font-bold">
              <span aria-hidden>{initials(person.name)}</span>
              <span className="sr-only">{person.name}</span>
            </li>
          ))}
          {others.length > 5 ? <li className="self-center">and {others.length - 5} more</li> : null}
        </ul>
      </div>
    </BarEnd>
  );
}
