/** Pieces that several contracts share: ids, times, texts, and the shape of an error. */
import { z } from 'zod';

const brandedId = <const Brand extends string>(_brand: Brand) => z.uuid().brand<Brand>();

export const personId = z.string().regex(/^[\w-]{1,64}$/).brand<'PersonId'>();
export const studyId = brandedId('StudyId');
export const conditionId = brandedId('ConditionId');
export const taskId = brandedId('TaskId');
export const participantId = brandedId('ParticipantId');
export const rigId = brandedId('RigId');
export const rigRevisionId = brandedId('RigRevisionId');
export const deviceId = brandedId('DeviceId');
export const sessionId = brandedId('SessionId');
export const trialId = brandedId('TrialId');
export const recordingId = brandedId('RecordingId');
export const flagId = brandedId('FlagId');
export const noteId = brandedId('NoteId');
export const mailId = brandedId('MailId');

export type PersonId = z.infer<typeof personId>;
export type StudyId = z.infer<typeof studyId>;
export type ConditionId = z.infer<typeof conditionId>;
export type TaskId = z.infer<typeof taskId>;
export type ParticipantId = z.infer<typeof participantId>;
export type RigId = z.infer<typeof rigId>;
export type RigRevisionId = z.infer<typeof rigRevisionId>;
export type DeviceId = z.infer<typeof deviceId>;
export type SessionId = z.infer<typeof sessionId>;
export type TrialId = z.infer<typeof trialId>;
export type RecordingId = z.infer<typeof recordingId>;
export type FlagId = z.infer<typeof flagId>;
export type NoteId = z.infer<typeof noteId>;
export type MailId = z.infer<typeof mailId>;

/** Wall time of the server, ISO 8601 in UTC. */
export const wallTime = z.iso.datetime();

/** One line of text a person typed: trimmed, not empty. */
export const line = (max: number) => z.string().trim().min(1, 'Write something here').max(max, `At most ${max} characters`);
/** Several lines of text a person typed. */
export const passage = (max: number) => z.string().trim().min(1, 'Write something here').max(max, `At most ${max} characters`);

/** Installation role (who one is in the lab); what one may do in a study comes from the membership. */
export const labRole = z.enum(['administrator', 'lead', 'operator', 'clinician']);
export type LabRole = z.infer<typeof labRole>;

/** Role inside one study; `reader` is an administrator who was added to the study: replay and notes, nothing else. */
export const studyRole = z.enum(['lead', 'operator', 'clinician', 'reader']);
export type StudyRole = z.infer<typeof studyRole>;

/** What one is in the lab bounds what one can be in a study. */
export const fittingStudyRoles: Readonly<Record<LabRole, readonly StudyRole[]>> = {
  administrator: ['reader'],
  lead: ['lead', 'operator'],
  operator: ['operator'],
  clinician: ['clinician'],
};

/** A person as others see them. */
export const personRef = z.object({ id: personId, name: z.string() });
export type PersonRef = z.infer<typeof personRef>;

/** One thing that is wrong in an input: where, and what was expected. */
export const faultPoint = z.object({ code: z.string(), path: z.string(), message: z.string() });
export type FaultPoint = z.infer<typeof faultPoint>;

/** Error body of every route: `application/problem+json` (RFC 9457) with a stable code and a way out. */
export const problem = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  detail: z.string(),
  code: z.string(),
  wayOut: z.string().optional(),
  requestId: z.string().optional(),
  faults: z.array(faultPoint).optional(),
});
export type Problem = z.infer<typeof problem>;

export const done = z.object({ done: z.literal(true) });
