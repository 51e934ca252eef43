/** The outbox: queued once, sent after the commit, at least once under one Message-ID; against the local SMTP fake. */
import { fork, type ChildProcess } from 'node:child_process';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import nodemailer, { type Transporter } from 'nodemailer';
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Mail } from '@db/models/teams.ts';
import { refuse } from '@/domain/refusals.ts';
import { setClock } from '@/server/clock.ts';
import { env, setEnv } from '@/server/env.ts';
import { composeLetter } from '@/server/mail/compose-letter.ts';
import { mailPart } from '@/server/mail/mail-part.ts';
import { queueMail } from '@/server/mail/queue-mail.ts';
import { retryDelayMs, sendOutbox } from '@/server/mail/send-outbox.ts';
import { projectRoot } from '@/server/project-root.ts';
import { useTestDatabase } from '../support/test-database.ts';

useTestDatabase();

interface Received {
  id: number;
  messageId: string;
  from: string;
  to: string[];
  subject: string;
  text: string;
  html: string | null;
  attachments: { filename: string; contentType: string; bytes: number; path: string }[];
}

let fake: ChildProcess;
let mailboxUrl = '';
let smtpPort = 0;
let folder = '';

async function startFake(): Promise<void> {
  const main = path.join(projectRoot, 'tests/fakes/smtp/main.ts');
  fake = fork(main, { execArgv: ['--import', 'tsx'], env: { ...process.env, SMTP_FAKE_FOLDER: folder } });
  const ready = await new Promise<{ smtpPort: number; mailboxPort: number }>((resolve, reject) => {
    fake.once('message', (message) => resolve(message as { smtpPort: number; mailboxPort: number }));
    fake.once('exit', (code) => reject(new Error(`The fake stopped with ${code}.`)));
  });
  smtpPort = ready.smtpPort;
  mailboxUrl = `http://127.0.0.1:${ready.mailboxPort}`;
}

const stopFake = (): Promise<unknown> => {
  const gone = new Promise((resolve) => fake.once('exit', resolve));
  fake.disconnect();
  return gone;
};

beforeAll(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'burette-mailbox-'));
  await startFake();
});
afterAll(async () => {
  await stopFake();
  await rm(folder, { recursive: true, force: true });
});
beforeEach(async () => {
  setClock(null);
  await inWriteTransaction(() => Mail.destroy({ where: {} }));
});

const letter = { subject: 'A letter', text: 'Hello', messageKey: 'letter:1' };
const transport = (port = smtpPort): Transporter =>
  nodemailer.createTransport({ host: '127.0.0.1', port, ignoreTLS: true });
const received = async (to: string): Promise<Received[]> => {
  const answer = await fetch(`${mailboxUrl}/messages?to=${encodeURIComponent(to)}`);
  return ((await answer.json()) as { messages: Received[] }).messages;
};

describe('queueMail', () => {
  it('queues one mail for one occasion, however often it is told', async () => {
    await queueMail({ ...letter, to: 'a@mail.example' });
    await Promise.all([1, 2, 3].map(() => queueMail({ ...letter, to: 'a@mail.example' })));
    expect(await Mail.count()).toBe(1);
  });

  it('queues nothing when the act it tells about is refused or fails', async () => {
    await inWriteTransaction(async () => {
      await queueMail({ ...letter, to: 'b@mail.example' });
      return refuse('forbidden', 'No.');
    });
    const failing = inWriteTransaction(async () => {
      await queueMail({ ...letter, to: 'b@mail.example' });
      throw new Error('broken');
    });
    await expect(failing).rejects.toThrow('broken');
    expect(await Mail.count()).toBe(0);
  });

  it('refuses a subject or recipient of several lines', async () => {
    const bad = { ...letter, to: 'c@mail.example', subject: 'Hello\r\nBcc: everybody@mail.example' };
    await expect(queueMail(bad)).rejects.toThrow('single lines');
  });
});

describe('sendOutbox', () => {
  it('delivers text, HTML and attachments, then forgets the content', async () => {
    const content = Buffer.from('%PDF-1.7 pretend');
    await queueMail({
      ...letter,
      ...composeLetter({ subject: 'Receipt <1>', paragraphs: ['Paid & done.'] }),
      to: 'paid@mail.example',
      attachments: [{ filename: 'receipt ü.pdf', contentType: 'application/pdf', content }],
    });
    await sendOutbox({ transport: transport() });
    const [mail] = await received('paid@mail.example');
    expect(mail).toMatchObject({ subject: 'Receipt <1>', to: ['paid@mail.example'] });
    expect(mail?.html).toContain('Paid &amp; done.');
    expect(mail?.attachments).toMatchObject([{ filename: 'receipt ü.pdf', contentType: 'application/pdf' }]);
    const file = await fetch(mailboxUrl + mail!.attachments[0]!.path);
    expect(Buffer.from(await file.arrayBuffer())).toEqual(content);
    const row = (await Mail.findOne())!;
    expect([row.state, row.text, row.html, row.attachments]).toEqual(['sent', null, null, null]);
  });

  it('sends again under the same Message-ID after a crash between sending and marking', async () => {
    await queueMail({ ...letter, to: 'twice@mail.example' });
    const row = (await Mail.findOne())!;
    await sendOutbox({ transport: transport() });
    const { text, nextAttemptAt } = row;
    await inWriteTransaction(() =>
      Mail.update({ state: 'queued', sentAt: null, text, nextAttemptAt }, { where: { id: row.id } }),
    );
    await sendOutbox({ transport: transport() });
    const ids = (await received('twice@mail.example')).map(({ messageId }) => messageId);
    expect(ids).toEqual([`<${row.id}@burette.test>`, `<${row.id}@burette.test>`]);
  });

  it('keeps a mail through an outage, waits longer each time, and delivers when the server is back', async () => {
    await queueMail({ ...letter, to: 'patient@mail.example' });
    const start = Date.now();
    let elapsedMs = 0;
    setClock(() => start + elapsedMs);
    const nobodyListens = transport(1);
    expect(await sendOutbox({ transport: nobodyListens })).toBe(5_000);
    elapsedMs += 5_000;
    expect(await sendOutbox({ transport: nobodyListens })).toBe(10_000);
    expect((await Mail.findOne())!).toMatchObject({ state: 'queued', attempts: 2, text: 'Hello' });
    elapsedMs += 10_000;
    expect(await sendOutbox({ transport: transport() })).toBeNull();
    expect(await received('patient@mail.example')).toHaveLength(1);
  });

  it('gives up on a mail that the server refuses for good, and goes on with the others', async () => {
    await queueMail({ ...letter, to: 'refused@mail.example' });
    await queueMail({ ...letter, messageKey: 'letter:2', to: 'fine@mail.example' });
    const real = transport();
    const refusing = {
      sendMail: (mail: { to: { address: string } }) =>
        mail.to.address === 'refused@mail.example'
          ? Promise.reject(Object.assign(new Error('550 no such mailbox'), { responseCode: 550 }))
          : real.sendMail(mail as never),
    } as unknown as Transporter;
    const start = Date.now();
    for (const elapsedMs of [0, 10_000, 60_000]) {
      setClock(() => start + elapsedMs);
      await sendOutbox({ transport: refusing });
    }
    const refused = await Mail.findOne({ where: { recipient: 'refused@mail.example' } });
    expect(refused).toMatchObject({ state: 'failed', attempts: 3, lastError: '550 no such mailbox' });
    expect(await received('fine@mail.example')).toHaveLength(1);
  });

  it('never waits longer than an hour', () => {
    expect([1, 2, 11, 24].map(retryDelayMs)).toEqual([5_000, 10_000, 3_600_000, 3_600_000]);
  });
});

describe('the mail part', () => {
  it('sends what is queued while it runs, by itself', async () => {
    setEnv({ ...env(), SMTP_FAKE_URL: `smtp://127.0.0.1:${smtpPort}` });
    const stop = await mailPart.start();
    await queueMail({ ...letter, messageKey: 'letter:part', to: 'soon@mail.example' });
    await vi.waitFor(async () => expect(await received('soon@mail.example')).toHaveLength(1), { timeout: 10_000 });
    await stop();
  });
});

describe('the local mailbox', () => {
  it('shows the list and a mail as pages on which nothing of the mail can run', async () => {
    const html = '<html><head></head><body><script>alert(1)</script><a href="https://x.example">x</a></body></html>';
    await queueMail({ ...letter, to: 'page@mail.example', subject: '<b>Bold</b>', html });
    await sendOutbox({ transport: transport() });
    const [mail] = await received('page@mail.example');
    const list = await (await fetch(`${mailboxUrl}/?to=page@mail.example`)).text();
    expect(list).toContain('&lt;b&gt;Bold&lt;/b&gt;');
    expect(list).toContain('nothing leaves this machine');
    const page = await (await fetch(`${mailboxUrl}/messages/${mail!.id}`)).text();
    expect(page).toMatch(/<iframe[^>]+sandbox="allow-popups/);
    const frame = await fetch(`${mailboxUrl}/messages/${mail!.id}/html`);
    expect(frame.headers.get('content-security-policy')).toMatch(/default-src 'none'.*sandbox/);
    expect((await fetch(`${mailboxUrl}/messages/999999`)).status).toBe(404);
    expect((await fetch(`${mailboxUrl}/messages`, { method: 'DELETE' })).status).toBe(405);
  });

  it('keeps its mails over a restart and goes when its parent goes', async () => {
    await queueMail({ ...letter, messageKey: 'letter:kept', to: 'kept@mail.example' });
    await sendOutbox({ transport: transport() });
    await stopFake();
    expect(fake.exitCode).toBe(0);
    await startFake();
    expect(await received('kept@mail.example')).toMatchObject([{ subject: 'A letter', text: expect.any(String) }]);
  });
});
