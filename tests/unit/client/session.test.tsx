// @vitest-environment jsdom
import { fireEvent, screen, waitFor } from '@testing-library/react';
import { expect, test } from 'vitest';
import { aPerson, id, openBook, refusal } from '../../support/client-pages';

const trial = (n: number, more: object = {}) => ({
  id: id(20 + n), number: n, state: 'planned', outcome: null, outcomeReason: null, task: { id: id(3), code: 'REACH', title: 'Reach', timeLimitS: null },
  condition: { id: id(4), blindCode: 'A', label: null }, durationS: null, flags: 0, notes: 0, deviceId: null, deviceName: null, ...more,
});
const session = {
  id: id(1), studyId: id(2), studyCode: 'KESTREL', studyTitle: 'Kestrel', participantId: id(5), participantCode: 'K-014', visit: 2, state: 'open', plannedAt: '2026-01-02T03:04:05.000Z',
  rigRevisionId: id(6), rigTitle: 'Heron', rigRevision: 1, trialsPlanned: 2, trialsRecorded: 1, flags: 0,
  trials: [trial(1, { state: 'stopped', durationS: 12.5 }), trial(2)],
};
const study = {
  id: id(2), code: 'KESTREL', title: 'Kestrel', state: 'running', participants: 1, sessions: 1, recordedTrials: 1, myRole: 'operator', protocol: '', conditions: [], tasks: [], members: [], blind: true, createdAt: '2026-01-02T03:04:05.000Z',
};
const as = (role: string) => aPerson({ role: 'operator', memberships: [{ studyId: id(2), studyCode: 'KESTREL', studyTitle: 'Kestrel', role, blind: true }] as never });
const page = `/sessions/${id(1)}`;
const answers = (role: string) => ({ 'GET /api/me': as(role), [`GET /api/sessions/${id(1)}`]: session, [`GET /api/studies/${id(2)}`]: study });

test('the run sheet leads to the recorded trial alone and shows a blind member the code alone', async () => {
  openBook(page, answers('operator'));
  await screen.findByRole('heading', { name: 'Participant K-014, second visit' });
  expect(screen.getByRole('link', { name: 'Trial 1, Reach' }).getAttribute('href')).toBe(`/trials/${id(21)}`);
  expect(screen.queryByRole('link', { name: 'Trial 2, Reach' })).toBeNull();
  expect(screen.getAllByText('condition A')).toHaveLength(2);
});

test('an outcome other than completed wants its reason before anything is sent; a refusal keeps both', async () => {
  const { asked } = openBook(page, { ...answers('operator'), [`PUT /api/trials/${id(21)}/outcome`]: refusal(409, 'TRIAL_NOT_STOPPED') });
  await screen.findByRole('heading', { name: 'Participant K-014, second visit' });
  fireEvent.click(screen.getByRole('button', { name: 'Give outcome of trial 1' }));
  fireEvent.click(screen.getByRole('radio', { name: /^void/ }));
  fireEvent.click(screen.getByRole('button', { name: 'Keep the outcome' }));
  const reason = await screen.findByLabelText('Reason');
  await waitFor(() => expect(reason.getAttribute('aria-invalid')).toBe('true'));
  expect(asked.some((one) => one.method === 'PUT')).toBe(false);
  fireEvent.change(reason, { target: { value: 'wrong block on the table' } });
  fireEvent.click(screen.getByRole('button', { name: 'Keep the outcome' }));
  expect((await screen.findByRole('alert')).textContent).toContain('TRIAL_NOT_STOPPED');
  expect(asked.find((one) => one.method === 'PUT')?.body).toEqual({ outcome: 'void', reason: 'wrong block on the table' });
  expect((screen.getByLabelText('Reason') as HTMLTextAreaElement).value).toBe('wrong block on the table');
});

test('a reader of the study finds nothing to run, judge or take out', async () => {
  openBook(page, answers('reader'));
  await screen.findByRole('heading', { name: 'Participant K-014, second visit' });
  expect(screen.queryByRole('link', { name: 'Run the session' })).toBeNull();
  expect(screen.queryByRole('button', { name: /outcome|Take out|Close/ })).toBeNull();
});

test('a session of a study one is no member of reads as no such page', async () => {
  openBook(page, { 'GET /api/me': as('operator'), [`GET /api/sessions/${id(1)}`]: refusal(404, 'NOT_FOUND') });
  await screen.findByRole('heading', { name: 'No such page' });
});

test('a log whose chain is broken says so in an alert', async () => {
  openBook(`${page}/log`, { ...answers('operator'), [`GET /api/sessions/${id(1)}/log`]: { entries: [{ n: 0, at: '2026-01-02T03:04:05.000Z', who: 'Owen', what: 'planned', detail: {}, hash: 'a'.repeat(64) }], holds: false } });
  await screen.findByRole('heading', { name: 'Log of the session' });
  expect(screen.getByRole('alert').textContent).toContain('broken');
});
