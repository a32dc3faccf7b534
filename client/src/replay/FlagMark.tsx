import type { FlagKind } from '@shared/api/sessions';
import type { PaletteRole } from './palette';
import { flagShapes } from './stave/flag-shapes';

const tones: Partial<Record<PaletteRole, string>> = { slack: 'text-slack', saturated: 'text-saturated', near: 'text-near', gap: 'text-gap', ink: 'text-ink' };

/** A kind's shape beside its word, the same as above the strings. */
export function FlagMark({ kind, className = '' }: { kind: FlagKind; className?: string }) {
  const shape = flagShapes[kind];
  return (
    <svg viewBox="-7 -7 14 14" width="14" height="14" aria-hidden className={`${tones[shape.role] ?? 'text-ink'} ${className}`}>
      <path d={shape.path} fill={shape.filled ? 'currentColor' : 'none'} stroke={shape.filled ? 'none' : 'currentColor'} strokeWidth="1.8" strokeLinecap="round" strokeLinejoin="round" />
    </svg>
  );
}
