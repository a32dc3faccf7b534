/**
 * Who may do what, written down from the table "who may do what" of the design, one line a route, independent of the
 * server's own guard table.
 *
 * Access to a study's data needs membership, an administrator's too. Who is no member reads as if the thing were absent;
 * a member without the right is told so. Clinicians see what a released summary names; nothing is released yet.
 */
export type Cell = 'yes' | 'no' | 'absent' | 'sign-in';

/** Roles in the lab, each once as a member of the study and once outside it; last somebody who is not signed in. */
export const callers = [
  'administrator in', 'administrator out', 'lead in', 'lead out', 'operator in', 'operator out', 'clinician in', 'clinician out', 'nobody',
] as const;
export type Caller = (typeof callers)[number];

const words: Record<string, Cell> = { y: 'yes', n: 'no', a: 'absent', s: 'sign-in' };

const lines = `
                            administrator  lead     operator  clinician  nobody
                            in   out       in  out  in  out   in  out

  api.describe              y    y         y   y    y   y     y   y      y
  auth.signIn               y    y         y   y    y   y     y   y      y
  auth.signOut              y    y         y   y    y   y     y   y      y
  auth.session              y    y         y   y    y   y     y   y      y
  auth.sessions             y    y         y   y    y   y     y   y      s
  auth.endSession           y    y         y   y    y   y     y   y      s
  auth.endOtherSessions     y    y         y   y    y   y     y   y      s
  auth.changePassword       y    y         y   y    y   y     y   y      s
  auth.requestReset         y    y         y   y    y   y     y   y      y
  auth.passwordReset        y    y         y   y    y   y     y   y      y
  entrance.get              y    y         y   y    y   y     y   y      y
  setup.make                y    y         y   y    y   y     y   y      y
  me.get                    y    y         y   y    y   y     y   y      s
  me.change                 y    y         y   y    y   y     y   y      s

  people.list               y    y         n   n    n   n     n   n      s
  people.invite             y    y         n   n    n   n     n   n      s
  people.change             y    y         n   n    n   n     n   n      s
  audit.list                y    y         n   n    n   n     n   n      s
  outbox.list               y    y         n   n    n   n     n   n      s
  devices.list              y    y         y   y    y   y     n   n      s
  devices.register          y    y         n   n    n   n     n   n      s
  devices.revoke            y    y         n   n    n   n     n   n      s
  rigs.list                 y    y         y   y    y   y     y   y      s
  rigs.get                  y    y         y   y    y   y     y   y      s
  rigRevisions.get          y    y         y   y    y   y     y   y      s
  rigs.import               y    y         y   y    n   n     n   n      s

  studies.list              y    y         y   y    y   y     y   y      s
  studies.listAll           y    y         n   n    n   n     n   n      s
  studies.create            n    n         y   y    n   n     n   n      s
  studies.get               y    a         y   a    y   a     y   a      s
  studies.change            n    a         y   a    n   a     n   a      s
  members.set               n    a         y   a    n   a     n   a      s
  members.remove            n    a         y   a    n   a     n   a      s
  members.candidates        n    a         y   a    n   a     n   a      s
  members.join              y    y         n   n    n   n     n   n      s
  participants.list         y    a         y   a    y   a     n   a      s
  participants.add          n    a         y   a    y   a     n   a      s

  sessions.list             y    a         y   a    y   a     y   a      s
  sessions.today            y    y         y   y    y   y     y   y      s
  sessions.plan             n    a         y   a    y   a     n   a      s
  sessions.get              y    a         y   a    y   a     a   a      s
  sessions.close            n    a         y   a    y   a     a   a      s
  sessions.log              n    a         y   a    y   a     a   a      s
  trials.add                n    a         y   a    y   a     a   a      s
  trials.get                y    a         y   a    y   a     a   a      s
  trials.arm                n    a         y   a    y   a     a   a      s
  trials.disarm             n    a         y   a    y   a     a   a      s
  trials.stop               n    a         y   a    y   a     a   a      s
  trials.judge              n    a         y   a    y   a     a   a      s
  trials.remove             n    a         y   a    n   a     a   a      s

  flags.list                y    a         y   a    y   a     a   a      s
  moments.list              y    a         y   a    y   a     n   a      s
  verdicts.list             y    a         y   a    y   a     a   a      s
  verdicts.give             n    a         y   a    n   a     n   a      s
  recordings.window         y    a         y   a    y   a     a   a      s
  recordings.csv            n    a         y   a    n   a     a   a      s
  recordings.import         n    a         y   a    y   a     a   a      s
  notes.list                y    a         y   a    y   a     a   a      s
  notes.add                 y    a         y   a    y   a     a   a      s
  notes.reply               y    a         y   a    y   a     a   a      s
  notes.edit                y    a         y   a    y   a     a   a      s
  notes.resolve             y    a         y   a    y   a     a   a      s
  notes.versions            y    a         y   a    y   a     a   a      s
`;

/** Rooms of the live socket: entered or refused. */
const roomLines = `
  devices                   y    y         y   y    y   y     n   n      s
  study                     y    n         y   n    y   n     n   n      s
  session                   y    n         y   n    y   n     n   n      s
  trial                     y    n         y   n    y   n     n   n      s
`;

function read(text: string): Map<string, Record<Caller, Cell>> {
  const rows = text.split('\n').map((line) => line.trim().split(/\s+/)).filter((parts) => parts.length === callers.length + 1);
  return new Map(rows.map(([name = '', ...cells]) => [name, Object.fromEntries(callers.map((caller, i) => [caller, words[cells[i] ?? '']])) as Record<Caller, Cell>]));
}

export const access = read(lines);
export const roomAccess = read(roomLines);
