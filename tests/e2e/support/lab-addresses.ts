/** Ids of what the demo lab holds, found through the API as its lead. */
import type { RigSummary } from '@shared/api/rigs';
import type { Session, SessionSummary } from '@shared/api/sessions';
import { type DemoHouse, studyOf } from './demo-lab';

export interface LabAddresses {
  sedge: string;
  mortise: string;
  openSession: string;
  closedSession: string;
  plannedSession: string;
  /** Recorded, with flags of several kinds, notes and replies. */
  richTrial: string;
  voidTrial: string;
  plannedTrial: string;
  /** Recorded, without an outcome. */
  unjudgedTrial: string;
  heron: string;
  wren: string;
}

export async function labAddresses(house: DemoHouse): Promise<LabAddresses> {
  const lead = await house.client('lead');
  const [sedge, mortise] = [(await studyOf(lead, 'SEDGE')).studyId, (await studyOf(lead, 'MORTISE')).studyId];
  const sessionsOf = async (study: string) => (await lead.get<{ sessions: SessionSummary[] }>(`/api/studies/${study}/sessions`)).body.sessions;
  const sessions = await sessionsOf(sedge);
  const session = (code: string, state: string) => must(sessions.find((one) => one.participantCode === code && one.state === state)).id;
  const trialsOf = async (id: string) => (await lead.get<Session>(`/api/sessions/${id}`)).body.trials;
  const [openSession, closedSession, plannedSession] = [session('SG-05', 'open'), session('SG-03', 'closed'), session('SG-06', 'planned')];
  const open = await trialsOf(openSession);
  const traced = await trialsOf(must((await sessionsOf(mortise)).find((one) => one.state === 'closed')).id);
  const { rigs } = (await lead.get<{ rigs: RigSummary[] }>('/api/rigs')).body;
  const rig = (code: string) => must(rigs.find((one) => one.code === code)).id;
  return {
    sedge, mortise, openSession, closedSession, plannedSession,
    richTrial: must((await trialsOf(closedSession))[0]).id,
    voidTrial: must(traced.find((trial) => trial.outcome === 'void')).id,
    plannedTrial: must(open.find((trial) => trial.state === 'planned')).id,
    unjudgedTrial: must(open.find((trial) => trial.state === 'stopped')).id,
    heron: rig('heron-8'),
    wren: rig('wren-8'),
  };
}

function must<T>(found: T | undefined): T {
  if (found === undefined) throw new Error('The demo lab does not hold what the browser tests look for');
  return found;
}
