// @vitest-environment jsdom
import { readFileSync } from 'node:fs';
import { fireEvent, screen, waitFor, within } from '@testing-library/react';
import { expect, test } from 'vitest';
import { aPerson, id, openBook, refusal } from '../../support/client-pages';

const text = readFileSync('samples/rigs/heron-8.json', 'utf8');
const heron = (): Record<string, unknown> => JSON.parse(text) as Record<string, unknown>;
const place = () => screen.getByLabelText('The file’s text') as HTMLTextAreaElement;
const paste = (value: string) => fireEvent.change(place(), { target: { value } });
const faults = async () => within(await screen.findByRole('list', { name: 'Faults by place' })).getAllByRole('listitem').map((item) => item.textContent ?? '');
const lab = { 'GET /api/me': aPerson(), 'GET /api/rigs': { rigs: [{ id: id(1), code: 'heron-8', title: 'Heron', cableCount: 8, revisions: 3, latest: id(2) }] } };

test('a rig file with several faults lists each by its place and nothing is sent', async () => {
  const { asked } = openBook('/rigs/import', lab);
  await screen.findByRole('heading', { name: 'Import a rig file' });
  const file = heron();
  delete file['tensionMax'];
  file['home'] = { p: [0, 0, 0], q: [0, 0, 0, 2], grasp: 'wide' };
  paste(JSON.stringify(file));
  const listed = await faults();
  expect(listed.some((line) => line.startsWith('tensionMax'))).toBe(true);
  expect(listed.some((line) => line.startsWith('home.grasp'))).toBe(true);
  fireEvent.click(screen.getByRole('button', { name: 'Import the rig' }));
  expect(asked.filter((one) => one.method === 'POST')).toEqual([]);
});

test('a text that is no JSON says at which line and column reading stopped', async () => {
  openBook('/rigs/import', lab);
  await screen.findByRole('heading', { name: 'Import a rig file' });
  paste('{\n  "format": "tautbook.rig/1",\n  "code" "heron-8"\n}');
  // The quotation mark after `"code" ` in the third line, by hand.
  expect((await faults())[0]).toContain('line 3, column 10');
});

test('a sound file of a known rig is announced as its next revision; the server’s own faults show by place and the text stays', async () => {
  const { asked } = openBook('/rigs/import', {
    ...lab,
    'POST /api/rigs': refusal(422, 'RIG_FAULTY', { faults: [{ code: 'RANK_AT_HOME', path: 'home', message: 'Rank 6 at home.' }] }),
  });
  await screen.findByRole('heading', { name: 'Import a rig file' });
  paste(text);
  fireEvent.change(screen.getByLabelText('Remark'), { target: { value: 'exits measured again' } });
  fireEvent.click(await screen.findByRole('button', { name: 'Import revision 4' }));
  expect((await faults())[0]).toContain('home');
  expect(asked.find((one) => one.method === 'POST')?.body).toEqual({ file: heron(), remark: 'exits measured again' });
  expect(place().value).toBe(text);
});

test('a file that is far too large for a rig is not read', async () => {
  openBook('/rigs/import', lab);
  await screen.findByRole('heading', { name: 'Import a rig file' });
  const large = new File(['x'.repeat(1_000_001)], 'recording.csv');
  fireEvent.change(screen.getByLabelText('Rig file'), { target: { files: [large] } });
  await waitFor(() => expect(screen.getByRole('alert').textContent).toContain('recording.csv'));
  expect(place().value).toBe('');
});
