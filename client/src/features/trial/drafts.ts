/**
 * What somebody is writing, kept in this tab until the server has it: a broken connection, a lapsed sign-in or a
 * reload costs no word. Each draft carries the key with which the server knows a second sending from a second note.
 */
export interface Draft {
  readonly text: string;
  readonly clientKey: string;
}

const name = (place: string) => `tautbook.draft.${place}`;

export function readDraft(place: string): Draft {
  try {
    const kept: unknown = JSON.parse(sessionStorage.getItem(name(place)) ?? 'null');
    if (typeof kept === 'object' && kept !== null && 'text' in kept && 'clientKey' in kept && typeof kept.text === 'string' && typeof kept.clientKey === 'string') {
      return { text: kept.text, clientKey: kept.clientKey };
    }
  } catch {
    // Nothing readable is kept here: begin anew.
  }
  return { text: '', clientKey: crypto.randomUUID() };
}

export function keepDraft(place: string, draft: Draft): void {
  try {
    if (draft.text === '') sessionStorage.removeItem(name(place));
    else sessionStorage.setItem(name(place), JSON.stringify(draft));
  } catch {
    // Storage is closed to this page: the draft lives as long as its form.
  }
}

export const dropDraft = (place: string): void => keepDraft(place, { text: '', clientKey: '' });
