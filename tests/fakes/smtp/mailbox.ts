/** The mails that the local SMTP fake has taken, in memory and, with a folder, on disk so that a restart keeps them. */
import { mkdir, readFile, readdir, rename, writeFile } from 'node:fs/promises';
import path from 'node:path';
import { simpleParser } from 'mailparser';

export interface Message {
  /** A number from 1, in the order of arrival. */
  id: number;
  messageId: string;
  from: string;
  to: string[];
  subject: string;
  receivedAt: string;
  text: string;
  html: string | null;
  attachments: { filename: string; contentType: string; content: Buffer }[];
}

const kept = 2_000;

export class Mailbox {
  #messages: Message[] = [];
  #nextId = 1;
  #folder: string | null;

  constructor(folder: string | null) {
    this.#folder = folder;
  }

  /** Reads the folder's mails again, oldest first. */
  async load(): Promise<void> {
    if (!this.#folder) return;
    await mkdir(this.#folder, { recursive: true });
    const files = (await readdir(this.#folder)).filter((name) => /^\d+\.eml$/.test(name)).sort();
    for (const file of files) {
      const raw = await readFile(path.join(this.#folder, file));
      // The envelope is kept in front of the mail: its recipients are who gets it, whatever the headers say.
      const end = raw.indexOf('\n');
      const { to, receivedAt } = JSON.parse(raw.subarray(0, end).toString()) as { to: string[]; receivedAt: string };
      await this.#keep({ id: Number.parseInt(file, 10), raw: raw.subarray(end + 1), to, receivedAt });
    }
  }

  /** Takes a mail; resolves when it is kept. `to` are the envelope's recipients. */
  async take(options: { raw: Buffer; to: string[] }): Promise<Message> {
    const { raw, to } = options;
    const id = this.#nextId++;
    const receivedAt = new Date().toISOString();
    if (this.#folder) {
      const file = path.join(this.#folder, `${String(id).padStart(6, '0')}.eml`);
      await writeFile(`${file}.part`, Buffer.concat([Buffer.from(`${JSON.stringify({ to, receivedAt })}\n`), raw]));
      await rename(`${file}.part`, file);
    }
    return this.#keep({ id, raw, to, receivedAt });
  }

  /** Newest first; `to` keeps those for one address. */
  list(to?: string): Message[] {
    const wanted = to?.trim().toLowerCase();
    const found = wanted ? this.#messages.filter((message) => message.to.includes(wanted)) : this.#messages;
    return [...found].sort((a, b) => b.id - a.id);
  }

  find(id: number): Message | undefined {
    return this.#messages.find((message) => message.id === id);
  }

  async #keep(options: { id: number; raw: Buffer; to: string[]; receivedAt: string }): Promise<Message> {
    const { id, raw, to, receivedAt } = options;
    this.#nextId = Math.max(this.#nextId, id + 1);
    const parsed = await simpleParser(raw);
    const message: Message = {
      id,
      messageId: parsed.messageId ?? '',
      from: parsed.from?.text ?? '',
      to: to.map((address) => address.toLowerCase()),
      subject: parsed.subject ?? '(no subject)',
      receivedAt,
      text: parsed.text ?? '',
      html: parsed.html || null,
      attachments: parsed.attachments.map(({ filename, contentType, content }, index) => ({
        filename: filename ?? `attachment-${index + 1}`,
        contentType,
        content,
      })),
    };
    this.#messages.push(message);
    if (this.#messages.length > kept) this.#messages.shift();
    return message;
  }
}
