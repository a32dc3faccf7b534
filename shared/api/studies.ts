/** Studies, their members and participants. */
import { z } from 'zod';
import { conditionId, done, line, participantId, passage, personId, studyId, studyRole, taskId, wallTime } from './common';
import { route } from './contract';

export const studyState = z.enum(['draft', 'running', 'closed', 'archived']);

/** `label` is null for a member who is blind: they see `blindCode` alone. */
export const condition = z.object({ id: conditionId, blindCode: z.string(), label: z.string().nullable() });
export const task = z.object({ id: taskId, code: z.string(), title: z.string(), timeLimitS: z.number().nullable() });

export const member = z.object({ personId, name: z.string(), role: studyRole, blind: z.boolean() });
export type Member = z.infer<typeof member>;

export const studySummary = z.object({
  id: studyId,
  code: z.string(),
  title: z.string(),
  state: studyState,
  participants: z.number().int(),
  sessions: z.number().int(),
  recordedTrials: z.number().int(),
  myRole: studyRole,
});
export type StudySummary = z.infer<typeof studySummary>;

export const study = studySummary.extend({
  protocol: z.string(),
  conditions: z.array(condition),
  tasks: z.array(task),
  members: z.array(member),
  /** True when the reader is blind to condition labels. */
  blind: z.boolean(),
  createdAt: wallTime,
});
export type Study = z.infer<typeof study>;

export const participant = z.object({
  id: participantId,
  code: z.string(),
  hand: z.enum(['left', 'right', 'both']),
  sessions: z.number().int(),
});
export type Participant = z.infer<typeof participant>;

const inStudy = z.object({ studyId });
export const studyCode = z.string().trim().regex(/^[A-Z][A-Z0-9-]{1,15}$/, 'Capital letters, digits and hyphens, 2 to 16, starting with a letter');
/** A pseudonym, never a name: letters, a hyphen, digits. */
export const participantCode = z.string().trim().regex(/^[A-Z]{1,4}-[0-9]{2,5}$/, 'Letters, a hyphen and digits, like K-014');

export const listStudies = route({ id: 'studies.list', method: 'GET', path: '/api/studies', summary: 'Studies one is a member of', response: z.object({ studies: z.array(studySummary) }) });

export const createStudy = route({
  id: 'studies.create',
  method: 'POST',
  path: '/api/studies',
  summary: 'Start a study; its maker becomes its lead',
  body: z.object({
    code: studyCode,
    title: line(120),
    protocol: z.string().trim().max(20_000).default(''),
    conditions: z.array(z.object({ blindCode: line(8), label: line(80) })).min(1).max(24),
    tasks: z.array(z.object({ code: line(24), title: line(120), timeLimitS: z.number('A number of seconds, or nothing').positive('More than 0 s').max(3600, 'At most 3600 s').nullable().default(null) })).min(1).max(24),
  }),
  response: study,
});

export const getStudy = route({ id: 'studies.get', method: 'GET', path: '/api/studies/:studyId', summary: 'One study', params: inStudy, response: study });

export const changeStudy = route({
  id: 'studies.change',
  method: 'PATCH',
  path: '/api/studies/:studyId',
  summary: 'Change title, protocol or state of a study',
  params: inStudy,
  body: z.object({ title: line(120).optional(), protocol: passage(20_000).optional(), state: studyState.optional() }),
  response: study,
});

export const setMember = route({
  id: 'members.set',
  method: 'PUT',
  path: '/api/studies/:studyId/members/:personId',
  summary: 'Add a person to a study, or change their role or blinding in it',
  params: inStudy.extend({ personId }),
  body: z.object({ role: studyRole, blind: z.boolean().default(false) }),
  response: member,
});

export const joinStudy = route({
  id: 'members.join',
  method: 'POST',
  path: '/api/studies/:studyId/join',
  summary: 'An administrator adds themselves to a study as a reader; audited',
  params: inStudy,
  response: member,
});

export const removeMember = route({
  id: 'members.remove',
  method: 'DELETE',
  path: '/api/studies/:studyId/members/:personId',
  summary: 'Take a person out of a study',
  params: inStudy.extend({ personId }),
  response: done,
});

export const listCandidates = route({
  id: 'members.candidates',
  method: 'GET',
  path: '/api/studies/:studyId/candidates',
  summary: 'People of the lab who could be added to the study',
  params: inStudy,
  response: z.object({ people: z.array(z.object({ id: personId, name: z.string(), role: z.string() })) }),
});

/** Administrators keep the installation in order without seeing inside: codes and counts only. */
export const listAllStudies = route({
  id: 'studies.listAll',
  method: 'GET',
  path: '/api/lab/studies',
  summary: 'Every study of the lab by code and title, for administrators',
  response: z.object({ studies: z.array(z.object({ id: studyId, code: z.string(), title: z.string(), state: studyState, member: z.boolean() })) }),
});

export const listParticipants = route({
  id: 'participants.list',
  method: 'GET',
  path: '/api/studies/:studyId/participants',
  summary: 'Participants of a study',
  params: inStudy,
  response: z.object({ participants: z.array(participant) }),
});

export const addParticipant = route({
  id: 'participants.add',
  method: 'POST',
  path: '/api/studies/:studyId/participants',
  summary: 'Add a participant by pseudonymous code',
  params: inStudy,
  body: z.object({ code: participantCode, hand: z.enum(['left', 'right', 'both']).default('right') }),
  response: participant,
});
