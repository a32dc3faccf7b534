/** A real mail server for the length of a test: takes what is sent to it, or refuses, or keeps the sender waiting. */
import type { AddressInfo } from 'node:net';
import { SMTPServer } from 'smtp-server';

export interface ReceivedMail {
  from: string;
  to: string[];
  user: string | undefined;
  /** As it came, undecoded. */
  raw: string;
  /** Headers by lower-case name, and every text part decoded. */
  headers: Map<string, string>;
  texts: string[];
}

export interface MailPeer {
  port: number;
  received: ReceivedMail[];
  /** Env settings that make a server send through this peer. */
  env: Record<string, string>;
  close(): Promise<void>;
}

export interface MailPeerOptions {
  user?: string;
  password?: string;
  refuse?: boolean;
  /** Mail is taken only after this; the sender waits. */
  after?: Promise<void>;
}

export async function openMailPeer({ user, password, refuse = false, after }: MailPeerOptions = {}): Promise<MailPeer> {
  const received: ReceivedMail[] = [];
  const server = new SMTPServer({
    disabledCommands: ['STARTTLS'],
    authOptional: user === undefined,
    allowInsecureAuth: true,
    onAuth: (auth, _session, callback) => (auth.username === user && auth.password === password ? callback(null, { user }) : callback(new Error('wrong user or password'))),
    onRcptTo: (_address, _session, callback) => callback(refuse ? Object.assign(new Error('no such mailbox'), { responseCode: 550 }) : null),
    onData(stream, session, callback) {
      const parts: Buffer[] = [];
      stream.on('data', (part: Buffer) => parts.push(part));
      stream.on('end', () => {
        void Promise.resolve(after).then(() => {
          const raw = Buffer.concat(parts).toString('latin1');
          const { mailFrom, rcptTo } = session.envelope;
          received.push({ from: mailFrom === false ? '' : mailFrom.address, to: rcptTo.map(({ address }) => address), user: session.user as string | undefined, raw, headers: headersOf(raw), texts: textsOf(raw) });
          callback();
        });
      });
    },
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.server.address() as AddressInfo;
  return {
    port,
    received,
    env: { SMTP_HOST: '127.0.0.1', SMTP_PORT: String(port), SMTP_FROM: 'Lab book <book@lab.example>', ...(user === undefined ? {} : { SMTP_USER: user, SMTP_PASSWORD: password ?? '' }) },
    close: () => new Promise((resolve) => server.close(() => resolve())),
  };
}

function headersOf(raw: string): Map<string, string> {
  const head = raw.slice(0, raw.indexOf('\r\n\r\n')).replace(/\r\n[ \t]+/g, ' ');
  return new Map(head.split('\r\n').map((line) => [line.slice(0, line.indexOf(':')).toLowerCase(), line.slice(line.indexOf(':') + 1).trim()]));
}

/** Parts of a multipart/alternative message (RFC 2046) in quoted-printable (RFC 2045) or as they are. */
function textsOf(raw: string): string[] {
  const boundary = /boundary="([^"]+)"/.exec(raw)?.[1];
  const parts = boundary === undefined ? [raw] : raw.split(`--${boundary}`).slice(1, -1);
  return parts.map((part) => {
    const cut = part.indexOf('\r\n\r\n');
    const body = part.slice(cut + 4);
    const bytes = /quoted-printable/i.test(part.slice(0, cut))
      ? body.replace(/=\r\n/g, '').replace(/=([0-9A-F]{2})/gi, (_, hex: string) => String.fromCharCode(Number.parseInt(hex, 16)))
      : body;
    return Buffer.from(bytes, 'latin1').toString('utf8');
  });
}
