/**
 * Mail: through SMTP when it is set up, otherwise into the local outbox.
 *
 * Every letter is kept with what became of it. A mail server that fails never breaks the request that caused the
 * letter: the failure is written down and shows in the outbox.
 */
import { createTransport } from 'nodemailer';
import type { Logger } from 'pino';
import type { Config } from '../config';
import type { Database } from '../db/engine';
import { describeFault } from '../http';
import { keepMail, latestMail, type MailRow } from './queries';
import type { Letter } from './templates';

export { invitation, passwordReset, type Letter } from './templates';
export type { MailRow } from './queries';

export interface Post {
  /** False: letters stay in the outbox. */
  readonly smtp: boolean;
  send(to: string, letter: Letter): Promise<'outbox' | 'sent' | 'failed'>;
  /** Sends while the caller goes on: for answers whose time must not tell whether there is somebody to write to. */
  sendBehind(to: string, letter: Letter): void;
  latest(limit: number): Promise<MailRow[]>;
  /** Waits for letters that are on their way. */
  close(): Promise<void>;
}

/** ms; a mail server that does not answer must not hold the page that waits. */
const smtpPatience = { connectionTimeout: 5_000, greetingTimeout: 5_000, socketTimeout: 10_000 };

export function createPost(db: Database, config: Pick<Config, 'smtp' | 'mailFrom'>, log: Logger): Post {
  const { smtp } = config;
  const transport = smtp && createTransport({
    host: smtp.host,
    port: smtp.port,
    secure: smtp.secure,
    ...(smtp.user === undefined ? {} : { auth: { user: smtp.user, pass: smtp.password ?? '' } }),
    ...smtpPatience,
  });

  async function deliver(to: string, letter: Letter): Promise<{ state: 'outbox' | 'sent' | 'failed'; failure?: string }> {
    if (!transport) return { state: 'outbox' };
    try {
      await transport.sendMail({ from: config.mailFrom, to, ...letter });
      return { state: 'sent' };
    } catch (error) {
      const failure = error instanceof Error ? error.message.slice(0, 500) : 'unknown';
      log.warn({ failure }, 'a mail could not be sent');
      return { state: 'failed', failure };
    }
  }

  async function send(to: string, letter: Letter): Promise<'outbox' | 'sent' | 'failed'> {
    const { state, failure } = await deliver(to, letter);
    await keepMail(db, { recipient: to, ...letter, state, failure: failure ?? null });
    return state;
  }

  const behind = new Set<Promise<unknown>>();
  return {
    smtp: smtp !== undefined,
    send,
    sendBehind(to, letter) {
      const sending = send(to, letter)
        .catch((error: unknown) => log.error({ fault: describeFault(error) }, 'a mail could not be kept'))
        .finally(() => behind.delete(sending));
      behind.add(sending);
    },
    latest: (limit) => latestMail(db, limit),
    async close() {
      await Promise.all(behind);
      transport?.close();
    },
  };
}
