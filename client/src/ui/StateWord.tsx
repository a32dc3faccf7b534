import type { ReactNode } from 'react';
import { classNames } from './class-names';

/** plain: as expected; waiting: somebody should act; live: happening now; good: confirmed; attention: must not be missed. */
export type StateTone = 'plain' | 'waiting' | 'live' | 'good' | 'attention';

const TONES: Record<StateTone, string> = {
  plain: 'text-soft',
  waiting: 'text-ink font-semibold',
  live: 'text-ink font-bold',
  good: 'text-confirmed-text font-semibold',
  attention: 'text-attention-text font-semibold',
};

/** A state as a word, never as a badge. What is live carries a filled dot beside the word. */
export function StateWord({ tone = 'plain', children }: { tone?: StateTone; children: ReactNode }) {
  return (
    <span className={classNames('text-small whitespace-nowrap', TONES[tone])}>
      {tone === 'live' ? <span aria-hidden className="inline-block size-2 rounded-full bg-current mr-1.5 align-baseline" /> : null}
      {children}
    </span>
  );
}
