// @vitest-environment jsdom
import { fireEvent, screen, waitFor } from '@testing-library/react';
import { expect, test } from 'vitest';
import { aPerson, id, openBook, refusal } from '../../support/client-pages';

const KEY = 'tbk_not-a-real-key-for-a-test';
const device = (more: object = {}) => ({ id: id(1), name: 'Bench 2', rigId: id(9), rigCode: 'heron-8', keyHint: '…test', state: 'registered', lastSeenAt: null, createdAt: '2026-01-02T03:04:05.000Z', revokedAt: null, faults: {}, clock: null, ...more });
const lab = {
  'GET /api/me': aPerson(),
  'GET /api/rigs': { rigs: [{ id: id(9), code: 'heron-8', title: 'Heron', cableCount: 8, revisions: 1, latest: id(8) }] },
};
const press = (name: string) => fireEvent.click(screen.getByRole('button', { name }));

test('the key of a new device shows once: only its own button puts it away, and then it is gone', async () => {
  openBook('/devices', { ...lab, 'GET /api/devices': { devices: [device()] }, 'POST /api/devices': { device: device(), key: KEY } });
  await screen.findByRole('heading', { name: 'Devices' });
  press('Register a device');
  await screen.findByRole('option', { name: 'Heron' });
  fireEvent.change(screen.getByLabelText('Name'), { target: { value: 'Bench 2' } });
  fireEvent.change(screen.getByLabelText('Rig'), { target: { value: id(9) } });
  press('Register');
  await screen.findByText(KEY);
  fireEvent.keyDown(screen.getByRole('dialog'), { key: 'Escape' });
  expect(screen.getByText(KEY)).toBeTruthy();
  press('I have put the key away');
  await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull());
  expect(document.body.textContent).not.toContain(KEY);
  press('Register a device');
  expect(screen.getByRole('dialog').textContent).not.toContain(KEY);
});

test('revoking asks first, and a refusal is told in place', async () => {
  const { asked } = openBook('/devices', { ...lab, 'GET /api/devices': { devices: [device({ state: 'connected' })] }, [`POST /api/devices/${id(1)}/revoke`]: refusal(409, 'DEVICE_REVOKED') });
  await screen.findByRole('heading', { name: 'Devices' });
  press('Revoke Bench 2');
  expect(asked.some((one) => one.method === 'POST')).toBe(false);
  press('Revoke its key');
  expect((await screen.findByRole('alert')).textContent).toContain('DEVICE_REVOKED');
});

test('a sign-in that ended in the middle of work is told, and what was typed is still there after signing in again', async () => {
  let out = true;
  const { asked } = openBook('/devices', {
    ...lab,
    'GET /api/devices': { devices: [device()] },
    'POST /api/devices': () => (out ? refusal(401, 'SIGNED_OUT') : { device: device(), key: KEY }),
    'POST /api/auth/sign-in/email': () => {
      out = false;
      return { done: true };
    },
  });
  await screen.findByRole('heading', { name: 'Devices' });
  press('Register a device');
  await screen.findByRole('option', { name: 'Heron' });
  fireEvent.change(screen.getByLabelText('Name'), { target: { value: 'Bench 3' } });
  fireEvent.change(screen.getByLabelText('Rig'), { target: { value: id(9) } });
  press('Register');
  await screen.findByRole('heading', { name: 'Your sign-in has ended' });
  fireEvent.change(screen.getByLabelText('Password'), { target: { value: 'a long enough one' } });
  press('Sign in');
  await waitFor(() => expect(screen.queryByRole('heading', { name: 'Your sign-in has ended' })).toBeNull());
  expect((screen.getByLabelText('Name') as HTMLInputElement).value).toBe('Bench 3');
  press('Register');
  await screen.findByText(KEY);
  expect(asked.filter((one) => one.path === '/api/devices' && one.method === 'POST').map((one) => one.body)).toEqual(Array(2).fill({ name: 'Bench 3', rigId: id(9) }));
});
