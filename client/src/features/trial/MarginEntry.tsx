import type { ReactNode } from 'react';
import { classNames } from '../../ui/class-names';

interface MarginEntryProps {
  readonly id: string;
  /** Moment or span, as the link that leads there. */
  readonly place: string;
  /** The reading line stands in it. */
  readonly here: boolean;
  readonly onGo: () => void;
  /** The pointer is over it: the stave lights it up. */
  readonly onLight: (on: boolean) => void;
  readonly state?: ReactNode;
  readonly children: ReactNode;
}

/** One line of the margin: its moment at the left, its state at the right. */
export function MarginEntry({ id, place, here, onGo, onLight, state, children }: MarginEntryProps) {
  return (
    <li
      id={id}
      aria-current={here ? 'true' : undefined}
      onPointerEnter={() => onLight(true)}
      onPointerLeave={() => onLight(false)}
      className={classNames('grid grid-cols-[4.25rem_minmax(0,1fr)_auto] gap-x-3 border-b border-rule py-2.5 pl-6 pr-6 max-sm:pl-5 max-sm:pr-5', here && 'bg-wash')}
    >
      <button type="button" onClick={onGo} className={classNames('text-left text-small self-start pt-0.5 underline decoration-rule-field decoration-1 underline-offset-4 hover:decoration-ink', here ? 'text-ink font-semibold' : 'text-soft')}>{place}</button>
      <div className="min-w-0 text-body">{children}</div>
      <div className="text-small whitespace-nowrap">{state}</div>
    </li>
  );
}
