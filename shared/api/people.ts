/** Who one is, the first administrator, people of the lab, and the mail that was sent to them. */
import { z } from 'zod';
import { done, labRole, line, mailId, personId, studyId, studyRole, wallTime } from './common';
import { route } from './contract';

export const emailAddress = z.email('This is no e-mail address').max(254, 'At most 254 characters').transform((text) => text.toLowerCase());
/** Length over composition rules (NIST SP 800-63B, from memory). */
export const password = z.string().min(12, 'At least 12 characters').max(128);

export const membershipOfMe = z.object({
  studyId,
  studyCode: z.string(),
  studyTitle: z.string(),
  role: studyRole,
  blind: z.boolean(),
});

export const me = z.object({
  id: personId,
  name: z.string(),
  email: z.string(),
  role: labRole,
  memberships: z.array(membershipOfMe),
  /** True in the demo: the screens say so and show the local outbox to everyone. */
  demo: z.boolean(),
});
export type Me = z.infer<typeof me>;

export const person = z.object({
  id: personId,
  name: z.string(),
  email: z.string(),
  role: labRole,
  /** invited: has not set a password yet; closed: may not sign in. */
  state: z.enum(['invited', 'active', 'closed']),
  createdAt: wallTime,
});
export type Person = z.infer<typeof person>;

export const getMe = route({ id: 'me.get', method: 'GET', path: '/api/me', summary: 'Who is signed in, and their studies', response: me });

export const changeMe = route({
  id: 'me.change',
  method: 'PATCH',
  path: '/api/me',
  summary: 'Change one’s own name; the audit trail keeps both',
  body: z.object({ name: line(80) }),
  response: me,
});

/** Public: what the sign-in page needs to know. */
export const getEntrance = route({
  id: 'entrance.get',
  method: 'GET',
  path: '/api/entrance',
  summary: 'What the sign-in page shows: whether the first administrator is still to be made, and demo sign-ins',
  response: z.object({
    setupNeeded: z.boolean(),
    demo: z.array(z.object({ role: labRole, name: z.string(), email: z.string(), password: z.string() })),
  }),
});

export const setUp = route({
  id: 'setup.make',
  method: 'POST',
  path: '/api/setup',
  summary: 'Make the first administrator with the one-time code printed on the server console',
  body: z.object({ code: line(64), name: line(80), email: emailAddress, password }),
  response: done,
});

export const listPeople = route({
  id: 'people.list',
  method: 'GET',
  path: '/api/people',
  summary: 'People of the lab',
  response: z.object({ people: z.array(person) }),
});

export const invitePerson = route({
  id: 'people.invite',
  method: 'POST',
  path: '/api/people',
  summary: 'Invite a person by e-mail; the mail holds a link to set a password',
  body: z.object({ name: line(80), email: emailAddress, role: labRole }),
  response: person,
});

export const changePerson = route({
  id: 'people.change',
  method: 'PATCH',
  path: '/api/people/:personId',
  summary: 'Change the role of a person, or close or reopen their access',
  params: z.object({ personId }),
  body: z.object({ role: labRole.optional(), closed: z.boolean().optional() }),
  response: person,
});

export const mailItem = z.object({
  id: mailId,
  to: z.string(),
  subject: z.string(),
  text: z.string(),
  state: z.enum(['outbox', 'sent', 'failed']),
  createdAt: wallTime,
});
export type MailItem = z.infer<typeof mailItem>;

export const listOutbox = route({
  id: 'outbox.list',
  method: 'GET',
  path: '/api/outbox',
  summary: 'Mail this installation sent or keeps locally because no SMTP server is set; newest first',
  response: z.object({ smtp: z.boolean(), mail: z.array(mailItem) }),
});

export const auditEntry = z.object({
  id: z.number().int(),
  at: wallTime,
  who: z.string(),
  action: z.string(),
  subject: z.string(),
  detail: z.record(z.string(), z.unknown()),
});

export const listAudit = route({
  id: 'audit.list',
  method: 'GET',
  path: '/api/audit',
  summary: 'Audit trail, newest first',
  query: z.object({ before: z.coerce.number().int().positive().optional(), limit: z.coerce.number().int().min(1).max(200).default(100) }),
  response: z.object({ entries: z.array(auditEntry) }),
});
