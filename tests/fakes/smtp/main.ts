/**
 * A mail server for development and tests, as a process of its own: takes every mail, delivers none.
 *
 * SMTP_FAKE_PORT and SMTP_FAKE_MAILBOX_PORT say where (0: any free port), SMTP_FAKE_FOLDER where to keep the mails, if
 * anywhere. Sends `{ ready: true, smtpPort, mailboxPort }` to its parent and exits when the parent is gone.
 */
import type { AddressInfo } from 'node:net';
import { SMTPServer } from 'smtp-server';
import { Mailbox } from './mailbox.ts';
import { mailboxServer } from './web.ts';

const port = (name: string): number => Number(process.env[name] ?? 0);
const mailbox = new Mailbox(process.env['SMTP_FAKE_FOLDER'] || null);
await mailbox.load();

const smtp = new SMTPServer({
  disabledCommands: ['AUTH', 'STARTTLS'],
  size: 25_000_000,
  onData(stream, session, done) {
    const chunks: Buffer[] = [];
    stream.on('data', (chunk: Buffer) => chunks.push(chunk));
    stream.on('end', () => {
      if (stream.sizeExceeded) return done(Object.assign(new Error('Message too large'), { responseCode: 552 }));
      const to = session.envelope.rcptTo.map(({ address }) => address);
      mailbox.take({ raw: Buffer.concat(chunks), to }).then(
        () => done(),
        (error: Error) => done(error),
      );
    });
  },
});
// A client that hangs up in the middle is its own affair.
smtp.on('error', (error) => console.error(`SMTP fake: ${error.message}`));
const web = mailboxServer(mailbox);

const listening = (server: { once(event: string, act: (error?: Error) => void): unknown }, listen: () => void) =>
  new Promise<void>((resolve, reject) => {
    server.once('error', (error) => reject(error));
    server.once('listening', () => resolve());
    listen();
  });
await listening(smtp.server, () => smtp.listen(port('SMTP_FAKE_PORT'), '127.0.0.1'));
await listening(web, () => web.listen(port('SMTP_FAKE_MAILBOX_PORT'), '127.0.0.1'));

const portOf = (address: AddressInfo | string | null): number => (address as AddressInfo).port;
process.send?.({ ready: true, smtpPort: portOf(smtp.server.address()), mailboxPort: portOf(web.address()) });
if (process.send) process.once('disconnect', () => process.exit(0));
process.once('SIGTERM', () => process.exit(0));
// Ctrl-C reaches the whole group; the server may still have a last mail to hand over, so the parent's end decides.
process.on('SIGINT', () => {
  if (!process.connected) process.exit(0);
});
