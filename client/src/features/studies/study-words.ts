import type { StudySummary } from '@shared/api/studies';
import type { StateTone } from '../../ui/StateWord';

export const STUDY_STATES: Readonly<Record<StudySummary['state'], { word: string; tone: StateTone }>> = {
  draft: { word: 'draft', tone: 'waiting' },
  running: { word: 'running', tone: 'live' },
  closed: { word: 'closed', tone: 'plain' },
  archived: { word: 'archived', tone: 'plain' },
};
