// @vitest-environment jsdom
import { fireEvent, screen, waitFor } from '@testing-library/react';
import { describe, expect, test } from 'vitest';
import { aPerson, openBook, refusal, silence } from '../../support/client-pages';

const entrance = { setupNeeded: false, demo: [] };
const out = refusal(401, 'SIGNED_OUT');
const type = (label: string, value: string) => fireEvent.change(screen.getByLabelText(label), { target: { value } });
const press = (name: string) => fireEvent.click(screen.getByRole('button', { name }));

describe('the entrance', () => {
  test('someone who is not signed in is led to the sign-in and comes back to where they wanted to go', async () => {
    let inside = false;
    openBook('/account?x=1', {
      'GET /api/me': () => (inside ? aPerson() : out),
      'GET /api/entrance': entrance,
      'POST /api/auth/sign-in/email': () => {
        inside = true;
        return { done: true };
      },
      'GET /api/auth/list-sessions': [],
      'GET /api/auth/get-session': null,
    });
    await screen.findByRole('heading', { name: 'Sign in' });
    expect(window.location.search).toBe(`?to=${encodeURIComponent('/account?x=1')}`);
    type('E-mail', 'Ines@lab.example');
    type('Password', 'a long enough one');
    press('Sign in');
    await screen.findByRole('heading', { name: 'Account' });
    expect(window.location.pathname + window.location.search).toBe('/account?x=1');
  });

  test('a way back that leads out of the book leads to Today instead', async () => {
    let inside = false;
    openBook('/sign-in?to=//elsewhere.example/trap', {
      'GET /api/me': () => (inside ? aPerson({ role: 'clinician' }) : out),
      'GET /api/entrance': entrance,
      'POST /api/auth/sign-in/email': () => {
        inside = true;
        return { done: true };
      },
    });
    await screen.findByRole('heading', { name: 'Sign in' });
    type('E-mail', 'ines@lab.example');
    type('Password', 'a long enough one');
    press('Sign in');
    await screen.findByRole('heading', { name: 'Today' });
    expect(window.location.pathname).toBe('/');
  });

  test('an empty slip says beside each field what is missing and asks the server nothing', async () => {
    const { asked } = openBook('/sign-in', { 'GET /api/entrance': entrance });
    await screen.findByRole('heading', { name: 'Sign in' });
    press('Sign in');
    for (const label of ['E-mail', 'Password']) {
      const field = screen.getByLabelText(label);
      await waitFor(() => expect(field.getAttribute('aria-invalid')).toBe('true'));
      const told = field.getAttribute('aria-describedby') ?? '';
      expect(document.getElementById(told)?.textContent).toBeTruthy();
    }
    expect(asked.filter((one) => one.method === 'POST')).toEqual([]);
  });

  test('a wrong password is told in an alert, and what was typed stays', async () => {
    openBook('/sign-in', {
      'GET /api/entrance': entrance,
      'POST /api/auth/sign-in/email': refusal(401, 'INVALID_EMAIL_OR_PASSWORD', { detail: 'E-mail and password do not fit together.' }),
    });
    await screen.findByRole('heading', { name: 'Sign in' });
    type('E-mail', 'ines@lab.example');
    type('Password', 'not the right one');
    press('Sign in');
    expect((await screen.findByRole('alert')).textContent).toContain('do not fit together');
    expect((screen.getByLabelText('E-mail') as HTMLInputElement).value).toBe('ines@lab.example');
  });

  test('a server that does not answer is told as that, not as a wrong password', async () => {
    openBook('/sign-in', { 'GET /api/entrance': entrance, 'POST /api/auth/sign-in/email': silence });
    await screen.findByRole('heading', { name: 'Sign in' });
    type('E-mail', 'ines@lab.example');
    type('Password', 'a long enough one');
    press('Sign in');
    expect((await screen.findByRole('alert')).textContent).toContain('did not answer');
  });

  test('demo sign-ins show when the entrance lists them', async () => {
    openBook('/sign-in', { 'GET /api/entrance': { setupNeeded: false, demo: [{ role: 'lead', name: 'Ines Marek', email: 'lead@demo.example', password: 'p' }] } });
    expect(await screen.findByRole('button', { name: 'Sign in as Ines Marek, experiment lead' })).toBeTruthy();
  });

  test('a new installation opens with the making of its administrator', async () => {
    openBook('/', { 'GET /api/me': out, 'GET /api/entrance': { setupNeeded: true, demo: [] } });
    await screen.findByRole('heading', { name: 'First opening' });
    type('Password', 'short');
    press('Open the book');
    await waitFor(() => expect(screen.getByLabelText('Password').getAttribute('aria-invalid')).toBe('true'));
  });
});
