/**
 * Sign-in by e-mail and password with better-auth, on our own tables.
 *
 * Nobody signs up: people are invited. Role and closed state are never taken from input. A closed person cannot sign
 * in, and a sign-in that was open when they were closed ends at the next request.
 */
import { randomBytes } from 'node:crypto';
import type { IncomingHttpHeaders } from 'node:http';
import { betterAuth } from 'better-auth';
import { APIError } from 'better-auth/api';
import { fromNodeHeaders, toNodeHandler } from 'better-auth/node';
import type { RequestHandler } from 'express';
import type { Logger } from 'pino';
import { labRole, personId } from '@shared/api/common';
import type { Database } from '../db/engine';
import { passwordReset, type Post } from '../mail';
import type { SignedIn } from './person';
import { isClosed, settingOr, signInTables, writeAudit } from './queries';

/** Seconds. A sign-in lasts a working day after its last use. */
const signInLastsS = 12 * 3600;
const refreshAfterS = 3600;
const resetLastsS = 3600;
export const invitationDays = 7;

export interface SignInDesk {
  /** Serves /api/auth/*. */
  handler: RequestHandler;
  /** `setCookies` are cookies that prolong the sign-in and should go out with the answer. */
  whoIs(headers: IncomingHttpHeaders): Promise<{ person: SignedIn; setCookies: string[] } | null>;
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
    // Served under whatever host the browser used: a page of the same host is at home, others are refused.
    trustedOrigins: (request) => {
      const host = request?.headers.get('host');
      return [publicUrl(), ...(host ? [`http://${host}`, `https://${host}`] : [])];
    },
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
        await post.send(user.email, passwordReset({ name: user.name, link, minutes: resetLastsS / 60 }));
      },
      async onPasswordReset({ user }) {
        await writeAudit(db, { actor: user.id, who: user.name, action: 'auth.passwordReset', subject: user.id });
      },
    },
    databaseHooks: {
      session: {
        create: {
          async before({ userId }) {
            if (await isClosed(db, userId)) throw new APIError('FORBIDDEN', { code: 'PERSON_CLOSED', message: 'Your access to this lab is closed. Ask an administrator.' });
          },
          async after({ userId }) {
            await writeAudit(db, { actor: userId, who: await nameOf(userId), action: 'auth.signIn', subject: userId });
          },
        },
      },
    },
    disabledPaths: ['/sign-up/email', '/update-user', '/change-email', '/delete-user', '/link-social', '/unlink-account', '/sign-in/social'],
    // Attempts are limited by our own shield, before they come here.
    rateLimit: { enabled: false },
    advanced: { cookiePrefix: 'tautbook', useSecureCookies: publicUrl().startsWith('https:'), disableOriginCheck: false },
  });
  const context = await auth.$context;

  async function nameOf(userId: string): Promise<string> {
    return (await context.internalAdapter.findUserById(userId))?.name ?? userId;
  }

  const nodeHandler = toNodeHandler(auth);
  return {
    handler: (req, res) => nodeHandler(req, res),
    async whoIs(headers) {
      if (headers.cookie === undefined) return null;
      const { response, headers: answer } = await auth.api.getSession({ headers: fromNodeHeaders(headers), returnHeaders: true });
      if (response === null || response.user.closed === true) return null;
      const { id, name, email, role } = response.user;
      return { person: { id: personId.parse(id), name, email, role: labRole.parse(role) }, setCookies: answer.getSetCookie() };
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
