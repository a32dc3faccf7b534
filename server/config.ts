/** The environment, read once and checked; everything else gets a `Config`. */
import { resolve } from 'node:path';
import { z } from 'zod';
import { StartRefusal } from './start-refusal';

const flag = z.enum(['true', 'false', '1', '0']).transform((text) => text === 'true' || text === '1');
const emptyIsUnset = (env: NodeJS.ProcessEnv) => Object.fromEntries(Object.entries(env).filter(([, value]) => value !== undefined && value !== ''));

const environment = z.object({
  /** 0 asks the system for a free port (tests). */
  PORT: z.coerce.number().int().min(0).max(65_535).default(4680),
  HOST: z.string().default('127.0.0.1'),
  DATA_DIR: z.string().default('.data'),
  DATABASE_URL: z.url({ protocol: /^postgres(ql)?$/ }).optional(),
  /** Address that people type; links in mails begin with it. */
  PUBLIC_URL: z.url({ protocol: /^https?$/ }).optional(),
  /** Secret that signs the session cookies; made and kept in the database when unset. */
  AUTH_SECRET: z.string().min(32).optional(),
  /** Number of reverse proxies in front, so that rate limits see the caller's address. */
  TRUSTED_PROXIES: z.coerce.number().int().min(0).max(8).default(0),
  LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
  SMTP_HOST: z.string().optional(),
  SMTP_PORT: z.coerce.number().int().min(1).max(65_535).default(587),
  SMTP_USER: z.string().optional(),
  SMTP_PASSWORD: z.string().optional(),
  /** true: TLS from the first byte (port 465); otherwise STARTTLS when the server offers it. */
  SMTP_SECURE: flag.default(false),
  SMTP_FROM: z.string().default('Tautbook <tautbook@localhost>'),
});

export interface SmtpConfig {
  host: string;
  port: number;
  secure: boolean;
  user: string | undefined;
  password: string | undefined;
}

export interface Config {
  port: number;
  host: string;
  /** Absolute. */
  dataDir: string;
  databaseUrl: string | undefined;
  /** Without a slash at the end; undefined: the address that the server listens on. */
  publicUrl: string | undefined;
  authSecret: string | undefined;
  trustedProxies: number;
  logLevel: z.infer<typeof environment>['LOG_LEVEL'];
  mailFrom: string;
  /** undefined: mail stays in the local outbox. */
  smtp: SmtpConfig | undefined;
}

/** @throws StartRefusal CONFIG, naming every setting that is wrong. */
export function loadConfig(env: NodeJS.ProcessEnv): Config {
  const parsed = environment.safeParse(emptyIsUnset(env));
  if (!parsed.success) {
    const faults = parsed.error.issues.map((issue) => `${issue.path.join('.')}: ${issue.message}`);
    throw new StartRefusal('CONFIG', `The settings in the environment cannot be used. ${faults.join('. ')}.`, 'Correct or remove these variables and start again.');
  }
  const value = parsed.data;
  return {
    port: value.PORT,
    host: value.HOST,
    dataDir: resolve(value.DATA_DIR),
    databaseUrl: value.DATABASE_URL,
    publicUrl: value.PUBLIC_URL?.replace(/\/+$/, ''),
    authSecret: value.AUTH_SECRET,
    trustedProxies: value.TRUSTED_PROXIES,
    logLevel: value.LOG_LEVEL,
    mailFrom: value.SMTP_FROM,
    smtp: value.SMTP_HOST === undefined
      ? undefined
      : { host: value.SMTP_HOST, port: value.SMTP_PORT, secure: value.SMTP_SECURE, user: value.SMTP_USER, password: value.SMTP_PASSWORD },
  };
}
