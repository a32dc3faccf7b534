/**
 * Sign-in by e-mail and password with better-auth, on our own tables and behind our own routes: its functions are
 * called, its HTTP endpoints are not served.
 *
 * Nobody signs up: people are invited. Role and closed state are never taken from input. A closed person cannot sign
 * in, and a sign-in that was open when they were closed ends at the next request.
 */
import { randomBytes } from 'node:crypto';
import type { IncomingHttpHeaders } from 'node:http';
import { betterAuth } from 'better-auth';
import { APIError } from 'better-auth/api';
import { fromNodeHeaders } from 'better-auth/node';
import type { Logger } from 'pino';
import { labRole, personId } from '@shared/api/common';
import type { BodyOf } from '@shared/api/contract';
import type { changePassword, makeSignIn, resetPassword, SignInEntry } from '@shared/api/sign-in';
import type { Database } from '../db/engine';
import { refuseRequest, type Refusal } from '../http';
import { passwordReset, type Post } from '../mail';
import { refuse } from './errors';
import type { SignedIn } from './person';
import { isClosed, settingOr, signInTables } from './queries';

/** Seconds. A sign-in lasts a working day after its last use. */
const signInLastsS = 12 * 3600;
const refreshAfterS = 3600;
const resetLastsS = 3600;
export const invitationDays = 7;

/** What a sign-in answers, and the cookies that should go out with it. */
export interface Answered<T> {
  answer: T;
  setCookies: string[];
}

/** Every method that refuses throws a Refusal. */
export interface SignInDesk {
  /** `setCookies` prolong the sign-in. @param prolong false: only a look, that counts as no use of the sign-in */
  whoIs(headers: IncomingHttpHeaders, prolong?: boolean): Promise<{ person: SignedIn; setCookies: string[] } | null>;
  signIn(headers: IncomingHttpHeaders, entry: BodyOf<typeof makeSignIn>): Promise<Answered<{ id: string; name: string }>>;
  signOut(headers: IncomingHttpHeaders): Promise<Answered<void>>;
  present(headers: IncomingHttpHeaders): Promise<SignInEntry | null>;
  list(headers: IncomingHttpHeaders): Promise<SignInEntry[]>;
  /** A token of somebody else ends nothing. */
  end(headers: IncomingHttpHeaders, token: string): Promise<Answered<void>>;
  endOthers(headers: IncomingHttpHeaders): Promise<void>;
  changePassword(headers: IncomingHttpHeaders, change: BodyOf<typeof changePassword>): Promise<Answered<void>>;
  /** Takes as long for an unknown address as for a known one: the letter goes out behind the answer. */
  requestReset(email: string): Promise<void>;
  resetPassword(change: BodyOf<typeof resetPassword>): Promise<{ id: string; name: string }>;
  /** Makes a token with which an invited person sets their password. */
  invitationToken(personId: string): Promise<string>;
}

export interface SignInOptions {
  db: Database;
  post: Post;
  log: Logger;
  authSecret: string | undefined;
  /** Address that people type, without a slash at the end; asked late, because a free port is known late. */
  publicUrl: () => string;
}

export async function createSignIn({ db, post, log, authSecret, publicUrl }: SignInOptions): Promise<SignInDesk> {
  const secret = authSecret ?? await settingOr(db, 'auth-secret', () => randomBytes(32).toString('base64url'));
  const auth = betterAuth({
    appName: 'Tautbook',
    baseURL: publicUrl(),
    basePath: '/api/auth',
    secret,
    telemetry: { enabled: false },
    logger: { level: 'warn', log: (level, message) => log[level === 'error' ? 'warn' : 'debug']({ from: 'sign-in' }, String(message)) },
    database: signInTables(db),
    user: {
      modelName: 'people',
      additionalFields: {
        role: { type: 'string', input: false, required: false },
        closed: { type: 'boolean', input: false, required: false },
      },
    },
    session: { modelName: 'signIns', expiresIn: signInLastsS, updateAge: refreshAfterS, freshAge: 0 },
    account: { modelName: 'accounts' },
    verification: { modelName: 'verifications' },
    emailAndPassword: {
      enabled: true,
      disableSignUp: true,
      minPasswordLength: 12,
      maxPasswordLength: 128,
      resetPasswordTokenExpiresIn: resetLastsS,
      revokeSessionsOnPasswordReset: true,
      async sendResetPassword({ user, token }) {
        if (await isClosed(db, user.id)) return;
        const link = `${publicUrl()}/reset?token=${encodeURIComponent(token)}`;
        post.sendBehind(user.email, passwordReset({ name: user.name, link, minutes: resetLastsS / 60 }));
      },
    },
    databaseHooks: {
      session: {
        create: {
          async before({ userId }) {
            if (await isClosed(db, userId)) throw refuse('PERSON_CLOSED');
          },
        },
      },
    },
    advanced: { cookiePrefix: 'tautbook', useSecureCookies: publicUrl().startsWith('https:') },
  });
  const context = await auth.$context;

  return {
    async whoIs(headers, prolong = true) {
      if (headers.cookie === undefined) return null;
      const { response, headers: answer } = await auth.api.getSession({ headers: fromNodeHeaders(headers), query: { disableRefresh: !prolong }, returnHeaders: true });
      if (response === null || response.user.closed === true) return null;
      const { id, name, email, role } = response.user;
      return { person: { id: personId.parse(id), name, email, role: labRole.parse(role) }, setCookies: answer.getSetCookie() };
    },

    async signIn(headers, body) {
      const { answer, setCookies } = await settle(auth.api.signInEmail({ body, headers: fromNodeHeaders(headers), returnHeaders: true }));
      return { answer: { id: answer.user.id, name: answer.user.name }, setCookies };
    },

    async signOut(headers) {
      return withoutAnswer(await settle(auth.api.signOut({ headers: fromNodeHeaders(headers), returnHeaders: true })));
    },

    async present(headers) {
      const found = await auth.api.getSession({ headers: fromNodeHeaders(headers) });
      return found === null || found.user.closed === true ? null : toEntry(found.session);
    },

    async list(headers) {
      const { answer } = await settle(auth.api.listSessions({ headers: fromNodeHeaders(headers), returnHeaders: true }));
      return answer.map(toEntry);
    },

    async end(headers, token) {
      return withoutAnswer(await settle(auth.api.revokeSession({ body: { token }, headers: fromNodeHeaders(headers), returnHeaders: true })));
    },

    async endOthers(headers) {
      await settle(auth.api.revokeOtherSessions({ headers: fromNodeHeaders(headers), returnHeaders: true }));
    },

    async changePassword(headers, body) {
      return withoutAnswer(await settle(auth.api.changePassword({ body: { ...body, revokeOtherSessions: true }, headers: fromNodeHeaders(headers), returnHeaders: true })));
    },

    async requestReset(email) {
      await settle(auth.api.requestPasswordReset({ body: { email }, returnHeaders: true }));
    },

    async resetPassword({ token, newPassword }) {
      const owner = await context.internalAdapter.findVerificationValue(`reset-password:${token}`);
      const person = owner && await context.internalAdapter.findUserById(owner.value);
      if (!person) throw refuse('INVALID_TOKEN');
      await settle(auth.api.resetPassword({ body: { token, newPassword }, returnHeaders: true }));
      return { id: person.id, name: person.name };
    },

    async invitationToken(userId) {
      const token = randomBytes(24).toString('base64url');
      await context.internalAdapter.createVerificationValue({
        identifier: `reset-password:${token}`,
        value: userId,
        expiresAt: new Date(Date.now() + invitationDays * 24 * 3600 * 1000),
      });
      return token;
    },
  };
}

const withoutAnswer = ({ setCookies }: Answered<unknown>): Answered<void> => ({ answer: undefined, setCookies });

interface StoredSignIn {
  token: string;
  userAgent?: string | null | undefined;
  createdAt: Date;
  expiresAt: Date;
}

const toEntry = ({ token, userAgent, createdAt, expiresAt }: StoredSignIn): SignInEntry => ({
  token, userAgent: userAgent ?? null, createdAt: createdAt.toISOString(), expiresAt: expiresAt.toISOString(),
});

/** What better-auth answers or refuses, in our terms. Codes that no caller can cause stay what they are: faults. */
async function settle<T>(work: Promise<{ response: T; headers: Headers }>): Promise<Answered<T>> {
  try {
    const { response, headers } = await work;
    return { answer: response, setCookies: headers.getSetCookie() };
  } catch (error) {
    throw (error instanceof APIError && refusalOf(String(error.body?.code))) || error;
  }
}

function refusalOf(code: string): Refusal | null {
  switch (code) {
    case 'INVALID_EMAIL_OR_PASSWORD':
    case 'INVALID_PASSWORD':
    case 'INVALID_TOKEN':
      return refuse(code);
    case 'USER_NOT_FOUND': // the person of a link is gone
      return refuse('INVALID_TOKEN');
    case 'UNAUTHORIZED': // the sign-in ended between the guard's look and now
      return refuseRequest('SIGN_IN');
    default:
      return null;
  }
}
