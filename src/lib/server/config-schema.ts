import { z } from 'zod';

/** Which conveniences are on: the mail page shows in demo and development only. */
const modes = ['production', 'demo', 'development', 'test'] as const;

const schema = z.object({
  DATABASE_URL: z
    .string({ error: 'is missing; set it to a PostgreSQL address like postgres://user@host/name' })
    .regex(/^postgres(ql)?:\/\//, 'must begin with postgres://'),
  NULLWRIGHT_MODE: z.enum(modes).default('production'),
  DATA_DIR: z.string().min(1).default('.data'),
  ORIGIN: z.url({ protocol: /^https?$/ }).default('http://localhost:3000'),
  SMTP_URL: z
    .string()
    .regex(/^smtps?:\/\//, 'must begin with smtp:// or smtps://')
    .optional(),
  MAIL_FROM: z.string().min(3).default('Nullwright <nullwright@localhost>'),
  UPLOAD_LIMIT_BYTES: z.coerce.number().int().positive().default(2_000_000_000),
  LOG_LEVEL: z.enum(['trace', 'debug', 'info', 'warn', 'error', 'silent']).default('info'),
});

export interface Config {
  databaseUrl: string;
  mode: (typeof modes)[number];
  /** Recordings, maps, uploads under way and kept mails live below this folder. */
  dataDir: string;
  origin: string;
  /** Absent: mails go to the local fake (demo, development, test) or are refused (production). */
  smtpUrl: string | undefined;
  mailFrom: string;
  uploadLimitBytes: number;
  logLevel: string;
}

/** Reads the environment or throws an error that names each wrong variable and its remedy. */
export function readConfig(env: Record<string, string | undefined>): Config {
  const parsed = schema.safeParse(env);
  if (!parsed.success) {
    const lines = parsed.error.issues.map((issue) => {
      const name = String(issue.path[0]);
      return `  ${name} ${issue.message} (got: ${shown(name, env[name])})`;
    });
    throw new Error(
      `Configuration is wrong:\n${lines.join('\n')}\nSee README.md, "Configuration".`,
    );
  }
  const values = parsed.data;
  return {
    databaseUrl: values.DATABASE_URL,
    mode: values.NULLWRIGHT_MODE,
    dataDir: values.DATA_DIR,
    origin: values.ORIGIN,
    smtpUrl: values.SMTP_URL,
    mailFrom: values.MAIL_FROM,
    uploadLimitBytes: values.UPLOAD_LIMIT_BYTES,
    logLevel: values.LOG_LEVEL,
  };
}

/** The message goes to logs and screens, and an address may hold a password. */
function shown(name: string, value: string | undefined): string {
  if (value === undefined) return 'nothing';
  return name === 'DATABASE_URL' || name === 'SMTP_URL' ? 'something else' : value;
}
