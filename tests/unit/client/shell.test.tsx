// @vitest-environment jsdom
import { fireEvent, screen, waitFor, within } from '@testing-library/react';
import { describe, expect, test } from 'vitest';
import type { LabRole } from '@shared/api/common';
import { aPerson, openBook, refusal, silence } from '../../support/client-pages';

const lab = (role: LabRole) => ({
  'GET /api/me': aPerson({ role }),
  'GET /api/today': { sessions: [], toJudge: [], recent: [] },
  'GET /api/people': { people: [] },
  'GET /api/rigs': { rigs: [] },
  'GET /api/devices': { devices: [] },
  'GET /api/studies': { studies: [] },
  'GET /api/lab/studies': { studies: [] },
});
const chapters = () => within(screen.getByRole('navigation', { name: 'Chapters' })).getAllByRole('link').map((link) => link.textContent);

describe('the binding', () => {
  test.each<[LabRole, string[]]>([
    ['administrator', ['Today', 'Studies', 'Rigs', 'Devices', 'People']],
    ['lead', ['Today', 'Studies', 'Rigs', 'Devices']],
    ['operator', ['Today', 'Studies', 'Rigs', 'Devices']],
    ['clinician', ['Today', 'Studies']],
  ])('shows %s the chapters they come for', async (role, expected) => {
    openBook('/', lab(role));
    await screen.findByRole('heading', { name: 'Today' });
    expect(chapters()).toEqual(expected);
  });

  test('turning a page moves the focus to its heading and names the page in the tab', async () => {
    openBook('/', lab('lead'));
    await screen.findByRole('heading', { name: 'Today' });
    fireEvent.click(screen.getByRole('link', { name: 'Rigs' }));
    const heading = await screen.findByRole('heading', { name: 'Rigs' });
    await waitFor(() => expect(document.activeElement).toBe(heading));
    expect(document.title).toBe('Rigs · Tautbook');
  });

  test('the skip link leads to the page itself', async () => {
    openBook('/', lab('lead'));
    await screen.findByRole('heading', { name: 'Today' });
    const skip = screen.getByRole('link', { name: 'Skip to the page' });
    expect(document.querySelector(skip.getAttribute('href') ?? '')).toBe(screen.getByRole('main'));
  });

  test('an address without a page says so and offers ways back', async () => {
    openBook('/no/such/thing', lab('operator'));
    await screen.findByRole('heading', { name: 'No such page' });
    expect(screen.getByRole('link', { name: 'To Today' }).getAttribute('href')).toBe('/');
  });

  test('a panel that fails leaves the page standing and can be tried again', async () => {
    let broken = true;
    openBook('/studies', { ...lab('administrator'), 'GET /api/lab/studies': () => (broken ? refusal(403, 'FORBIDDEN') : { studies: [] }) });
    await screen.findByRole('heading', { name: 'Studies' });
    const alert = await screen.findByRole('alert');
    broken = false;
    fireEvent.click(within(alert).getByRole('button', { name: 'Try again' }));
    await screen.findByText('The lab has no study yet');
    expect(screen.getByRole('heading', { name: 'Studies' })).toBeTruthy();
  });

  test('a page one may not open says what the server said, inside the binding', async () => {
    openBook('/people', { ...lab('operator'), 'GET /api/people': refusal(403, 'FORBIDDEN', { wayOut: 'Ask the administrator.' }) });
    await screen.findByRole('heading', { name: 'This page is not open to you' });
    expect(screen.getByRole('alert').textContent).toContain('Ask the administrator.');
    expect(chapters()).toContain('Studies');
  });

  test('when the server is silent from the start, the page says so instead of staying blank', async () => {
    openBook('/', { 'GET /api/me': silence });
    await screen.findByRole('heading', { name: 'This page could not be opened' });
    expect(screen.getByRole('alert').textContent).toContain('did not answer');
  });

  test('a clinician reads honestly that nothing was released', async () => {
    const { asked } = openBook('/', lab('clinician'));
    await screen.findByText('No summary has been released to you');
    expect(asked.map((one) => one.path)).not.toContain('/api/today');
  });
});
