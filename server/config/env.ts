import path from 'node:path';
import { z } from 'zod';

/** An empty variable counts as an absent one, as `.env` files leave them. */
const absentWhenEmpty = (value: unknown) => (value === '' ? undefined : value);
const optional = <T extends z.ZodType>(schema: T) => z.preprocess(absentWhenEmpty, schema);

const urlOf = (...protocols: string[]) =>
  z
    .string()
    .refine(
      (text) => URL.canParse(text) && protocols.includes(new URL(text).protocol),
      `must be an address that starts with ${protocols.map((name) => `${name}//`).join(' or ')}`,
    );

const settings = z.object({
  PORT: optional(z.coerce.number().int().min(1).max(65_535).default(4300)),
  HOST: optional(z.string().default('127.0.0.1')),
  FISHPLATE_DATA_DIR: optional(z.string().default('.data')),
  FISHPLATE_DEMO: optional(z.enum(['0', '1']).optional()),
  DATABASE_URL: optional(urlOf('mariadb:', 'mysql:')),
  SMTP_URL: optional(urlOf('smtp:', 'smtps:').optional()),
  PUBLIC_URL: optional(urlOf('http:', 'https:').optional()),
  SESSION_SECRET: optional(z.string().min(32, 'must have 32 characters at least')),
  METRICS_TOKEN: optional(z.string().min(16, 'must have 16 characters at least').optional()),
  FISHPLATE_RETAIN_MONTHS: optional(z.coerce.number().int().min(1).max(120).default(13)),
});

/** The variables that are read. */
export const settingNames = Object.keys(settings.shape);

/** The settings of one server process. */
export interface Env {
  port: number;
  /** The interface the server listens on; loopback unless told otherwise. */
  host: string;
  dataDir: string;
  demo: boolean;
  databaseUrl: string;
  /** null: no mail leaves; the demo then brings its own mailbox. */
  smtpUrl: string | null;
  /** Where people reach the portal; no slash at its end. */
  publicUrl: string;
  sessionSecret: string;
  /** null: /metrics does not exist. */
  metricsToken: string | null;
  /** Months back that a read is taken up; an older one is set aside. */
  retainMonths: number;
}

/** Reads the settings; throws one error that names every faulty variable and never a value. */
export function readEnv(source: NodeJS.ProcessEnv = process.env): Env {
  const result = settings.safeParse(source);
  if (!result.success) {
    const faults = result.error.issues.map((issue) => {
      const name = issue.path.join('.');
      return `  ${name} ${source[name] ? issue.message : 'must be set'}`;
    });
    throw new Error(`The settings are not right:\n${faults.join('\n')}\nSee .env.example.`);
  }
  const values = result.data;
  return {
    port: values.PORT,
    host: values.HOST,
    dataDir: values.FISHPLATE_DATA_DIR,
    // Unset, the server is no demo: `start` turns it on when it also brings the database.
    demo: values.FISHPLATE_DEMO === '1',
    databaseUrl: values.DATABASE_URL,
    smtpUrl: values.SMTP_URL ?? null,
    publicUrl: (values.PUBLIC_URL ?? `http://127.0.0.1:${values.PORT}`).replace(/\/+$/, ''),
    sessionSecret: values.SESSION_SECRET,
    metricsToken: values.METRICS_TOKEN ?? null,
    retainMonths: values.FISHPLATE_RETAIN_MONTHS,
  };
}

/** Where the demo keeps the mail it sent, as `.eml` files. */
export function mailboxDirectory(env: Pick<Env, 'dataDir'>): string {
  return path.join(env.dataDir, 'mailbox');
}
