/** Sign-in, sign-out, passwords and the list of sign-ins. */
import {
  changePassword as changePasswordRoute, endOtherSignIns as endOtherSignInsRoute, endSignIn as endSignInRoute, getSignIn, listSignIns as listSignInsRoute, makeSignIn,
  requestReset as requestResetRoute, resetPassword as resetPasswordRoute, signOut as signOutRoute,
} from '@shared/api/sign-in';
import { call } from './api';

export const signIn = (email: string, password: string) => call(makeSignIn, { body: { email, password } });
export const signOut = () => call(signOutRoute);
/** Answers the same whether or not the address is known. */
export const requestReset = (email: string) => call(requestResetRoute, { body: { email } });
export const resetPassword = (token: string, newPassword: string) => call(resetPasswordRoute, { body: { token, newPassword } });
export const changePassword = (currentPassword: string, newPassword: string) => call(changePasswordRoute, { body: { currentPassword, newPassword } });

export interface SignInEntry {
  token: string;
  device: string;
  startedAt: string;
  expiresAt: string;
  here: boolean;
}

/** The reader's sign-ins, the present one first, then newest first. */
export async function listSignIns(): Promise<SignInEntry[]> {
  const [all, present] = await Promise.all([call(listSignInsRoute), call(getSignIn)]);
  return all
    .map(({ token, userAgent, createdAt, expiresAt }) => ({ token, device: userAgent ?? '', startedAt: createdAt, expiresAt, here: token === present?.session.token }))
    .sort((a, b) => Number(b.here) - Number(a.here) || b.startedAt.localeCompare(a.startedAt));
}

export const endSignIn = (token: string) => call(endSignInRoute, { body: { token } });
export const endOtherSignIns = () => call(endOtherSignInsRoute);
