/** Sign-in by e-mail and password, forgotten and changed passwords, and the list of one's open sign-ins. */
import { z } from 'zod';
import { done, wallTime } from './common';
import { route } from './contract';
import { emailAddress, password } from './people';

/** A password that was chosen some time: judged by whether it is right, not by how long it is. */
const knownPassword = z.string().min(1, 'Write the password').max(128);

/** One open sign-in. The token names it; without the signed cookie it opens nothing. */
export const signInEntry = z.object({ token: z.string(), userAgent: z.string().nullable(), createdAt: wallTime, expiresAt: wallTime });
export type SignInEntry = z.infer<typeof signInEntry>;

export const makeSignIn = route({
  id: 'auth.signIn',
  method: 'POST',
  path: '/api/auth/sign-in/email',
  summary: 'Sign in; the answer sets the cookie that later requests are known by',
  body: z.object({ email: emailAddress, password: knownPassword }),
  response: done,
});

export const signOut = route({ id: 'auth.signOut', method: 'POST', path: '/api/auth/sign-out', summary: 'Sign out here', response: done });

export const getSignIn = route({
  id: 'auth.session',
  method: 'GET',
  path: '/api/auth/get-session',
  summary: 'The sign-in that the request is known by, or null',
  response: z.object({ session: signInEntry }).nullable(),
});

export const listSignIns = route({ id: 'auth.sessions', method: 'GET', path: '/api/auth/list-sessions', summary: 'One’s open sign-ins', response: z.array(signInEntry) });

export const endSignIn = route({
  id: 'auth.endSession',
  method: 'POST',
  path: '/api/auth/revoke-session',
  summary: 'End one of one’s own sign-ins',
  body: z.object({ token: z.string().min(1).max(200) }),
  response: done,
});

export const endOtherSignIns = route({ id: 'auth.endOtherSessions', method: 'POST', path: '/api/auth/revoke-other-sessions', summary: 'End all of one’s sign-ins but this one', response: done });

export const changePassword = route({
  id: 'auth.changePassword',
  method: 'POST',
  path: '/api/auth/change-password',
  summary: 'Change one’s own password; other sign-ins end',
  body: z.object({ currentPassword: knownPassword, newPassword: password }),
  response: done,
});

export const requestReset = route({
  id: 'auth.requestReset',
  method: 'POST',
  path: '/api/auth/request-password-reset',
  summary: 'Have a link to a new password sent; the answer is the same whether or not the address is known',
  body: z.object({ email: emailAddress }),
  response: done,
});

export const resetPassword = route({
  id: 'auth.passwordReset',
  method: 'POST',
  path: '/api/auth/reset-password',
  summary: 'Set a new password with the token of a letter, once; all sign-ins end',
  body: z.object({ token: z.string().min(1).max(200), newPassword: password }),
  response: done,
});
