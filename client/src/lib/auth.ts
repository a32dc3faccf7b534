/** Sign-in, sign-out, passwords and the list of sign-ins: better-auth's own client, with its errors as problems. */
import { createAuthClient } from 'better-auth/client';
import { ApiProblem, networkProblem } from './api-problem';

/** The page's own fetch at the time of the call, not the one that was there when this file was read. */
const client = createAuthClient({ basePath: '/api/auth', fetchOptions: { customFetchImpl: (input, init) => fetch(input, init) } });

interface Answer<T> {
  data: T | null;
  error: { status: number; code?: string; message?: string } | null;
}

/** Sentences for the codes that a person can do something about; the rest falls back on the status. */
const SAID: Readonly<Record<string, { detail: string; wayOut: string }>> = {
  INVALID_EMAIL_OR_PASSWORD: { detail: 'E-mail and password do not fit together.', wayOut: 'Check both, or have a new password sent.' },
  INVALID_PASSWORD: { detail: 'The present password is not right.', wayOut: 'Type it again, or sign out and have a new one sent.' },
  PERSON_CLOSED: { detail: 'Your access to this lab is closed.', wayOut: 'Ask an administrator.' },
  INVALID_TOKEN: { detail: 'This link has been used or is too old.', wayOut: 'Ask for a new one.' },
  PASSWORD_TOO_SHORT: { detail: 'The password is too short.', wayOut: 'Take at least 12 characters; a few unrelated words do well.' },
  SESSION_NOT_FRESH: { detail: 'You signed in too long ago for this change.', wayOut: 'Sign out and in again, then repeat it.' },
};

async function settle<T>(answer: Promise<Answer<T>>): Promise<T> {
  let result: Answer<T>;
  try {
    result = await answer;
  } catch {
    throw networkProblem();
  }
  if (result.error === null) return result.data as T;
  const { status, code = `HTTP_${status}`, message } = result.error;
  if (status === 0) throw networkProblem();
  if (status === 429) throw new ApiProblem({ code: 'TOO_MANY', status, detail: 'Too many tries in a short time.', wayOut: 'Wait a minute, then try again.' });
  const said = SAID[code];
  throw new ApiProblem({ code, status, detail: said?.detail ?? message ?? 'The server refused the request.', wayOut: said?.wayOut ?? 'Try again; if it stays, ask the administrator.' });
}

export const signIn = (email: string, password: string) => settle(client.signIn.email({ email, password }));
export const signOut = () => settle(client.signOut());
/** Answers the same whether or not the address is known. */
export const requestReset = (email: string) => settle(client.requestPasswordReset({ email, redirectTo: '/reset' }));
export const resetPassword = (token: string, newPassword: string) => settle(client.resetPassword({ token, newPassword }));
export const changePassword = (currentPassword: string, newPassword: string) => settle(client.changePassword({ currentPassword, newPassword, revokeOtherSessions: true }));

export interface SignInEntry {
  token: string;
  device: string;
  startedAt: string;
  expiresAt: string;
  here: boolean;
}

/** The reader's sign-ins, the present one first, then newest first. */
export async function listSignIns(): Promise<SignInEntry[]> {
  const [all, present] = await Promise.all([settle(client.listSessions()), settle(client.getSession())]);
  return all
    .map((entry) => ({
      token: entry.token,
      device: entry.userAgent ?? '',
      startedAt: new Date(entry.createdAt).toISOString(),
      expiresAt: new Date(entry.expiresAt).toISOString(),
      here: entry.token === present?.session.token,
    }))
    .sort((a, b) => Number(b.here) - Number(a.here) || b.startedAt.localeCompare(a.startedAt));
}

export const endSignIn = (token: string) => settle(client.revokeSession({ token }));
export const endOtherSignIns = () => settle(client.revokeOtherSessions());
