/** The only reader of the environment. Validated once at boot; a wrong value stops the server with a sentence. */
import path from 'node:path';
import { availableParallelism } from 'node:os';
import { z } from 'zod';
import { projectRoot } from './project-root.ts';

const flag = z.enum(['0', '1']).transform((value) => value === '1');

/** Networks such as `10.0.4.0/24`, separated by commas; a wrong one stops the boot. */
const networks = z
  .string()
  .default('')
  .transform((text) =>
    text
      .split(',')
      .map((one) => one.trim())
      .filter(Boolean),
  )
  .pipe(z.array(z.union([z.cidrv4(), z.cidrv6(), z.ipv4(), z.ipv6()], 'Not a network such as 10.0.4.0/24.')));

const schema = z.object({
  NODE_ENV: z.enum(['development', 'production', 'test']).default('development'),
  PORT: z.coerce.number().int().min(0).max(65_535).default(4321),
  HOST: z.string().default('127.0.0.1'),
  /** What links in mails and pages are built from, and the Origin that unsafe requests must carry. */
  PUBLIC_URL: z.url().optional(),
  /** Where the database and the results live. */
  BURETTE_DATA_DIR: z.string().optional(),
  /** Simulation threads. */
  BURETTE_WORKERS: z.coerce.number().int().min(1).max(64).optional(),
  /** Puts the demo teams into an empty database at start. */
  BURETTE_DEMO: flag.default(false),
  LOG_LEVEL: z.enum(['silent', 'fatal', 'error', 'warn', 'info', 'debug', 'trace']).default('info'),
  /** Behind a proxy that sets X-Forwarded-For. */
  TRUST_PROXY: flag.default(false),
  /** The hosted payment service; without it, the local fake at STRIPE_FAKE_URL. */
  STRIPE_SECRET_KEY: z.string().optional(),
  STRIPE_WEBHOOK_SECRET: z.string().optional(),
  STRIPE_FAKE_URL: z.url().optional(),
  /** Outgoing mail; without it, the local fake at SMTP_FAKE_URL. */
  SMTP_URL: z.url().optional(),
  SMTP_FAKE_URL: z.url().optional(),
  /** Page that shows the local fake's mailbox; development only. */
  MAILBOX_URL: z.url().optional(),
  MAIL_FROM: z.string().default('Burette <no-reply@burette.example>'),
  /** Networks that outgoing webhooks may reach though they are not public, on any port. */
  WEBHOOK_ALLOWED_NETWORKS: networks,
  /** The seller on invoices. */
  SELLER_NAME: z.string().default('Burette Compute Ltd (sample seller)'),
  SELLER_ADDRESS: z.string().default('1 Sample Quay\nExampleton EX1 1EX'),
  SELLER_COUNTRY: z.string().length(2).default('GB'),
  SELLER_VAT_NUMBER: z.string().default('GB999999973'),
  /** ISO 4217 currency of the seller's books. */
  SELLER_CURRENCY: z.string().length(3).default('GBP'),
});

export type Env = Readonly<
  Omit<z.infer<typeof schema>, 'PUBLIC_URL' | 'BURETTE_DATA_DIR' | 'BURETTE_WORKERS'> & {
    PUBLIC_URL: string;
    BURETTE_DATA_DIR: string;
    BURETTE_WORKERS: number;
  }
>;

/** Reads and checks `source`; throws an Error whose message lists every wrong variable. */
export function readEnv(source: Record<string, string | undefined>): Env {
  const present = Object.fromEntries(Object.entries(source).filter(([, value]) => value !== ''));
  const parsed = schema.safeParse(present);
  if (!parsed.success) {
    const faults = parsed.error.issues.map((issue) => `  ${issue.path.join('.')}: ${issue.message}`);
    throw new Error(`The environment is not usable:\n${faults.join('\n')}`);
  }
  const values = parsed.data;
  return Object.freeze({
    ...values,
    PUBLIC_URL: (values.PUBLIC_URL ?? `http://localhost:${values.PORT}`).replace(/\/+$/, ''),
    BURETTE_DATA_DIR: path.resolve(projectRoot, values.BURETTE_DATA_DIR ?? 'var'),
    BURETTE_WORKERS: values.BURETTE_WORKERS ?? Math.max(1, availableParallelism()),
  });
}

const house = globalThis as typeof globalThis & { buretteEnv?: Env };

/** The process's environment, read at first use. */
export const env = (): Env => (house.buretteEnv ??= readEnv(process.env));

/** Tests put their own in place. */
export const setEnv = (value: Env): void => {
  house.buretteEnv = value;
};
