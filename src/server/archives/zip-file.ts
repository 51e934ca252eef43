/** Writes a zip to a file as a stream: fixed dates, one pinned deflate, so that equal content gives equal bytes. */
import { createHash, type Hash } from 'node:crypto';
import { createWriteStream, type WriteStream } from 'node:fs';
import { once } from 'node:events';
import { Zip, ZipDeflate } from 'fflate';

export interface WrittenEntry {
  path: string;
  /** Of the entry's content. */
  sha256: string;
  bytes: number;
}

/** The zip format's first day; local, since the library reads local fields, so every time zone gives the same bytes. */
const entryDate = new Date(1980, 0, 1);
const pieceBytes = 64 * 1024;

export class ZipFile {
  readonly #zip: Zip;
  readonly #stream: WriteStream;
  readonly #hash: Hash = createHash('sha256');
  readonly #closed: Promise<void>;
  #failure: Error | null = null;
  #bytes = 0;

  constructor(file: string) {
    this.#stream = createWriteStream(file);
    this.#closed = new Promise((resolve, reject) => {
      this.#stream.once('close', resolve);
      this.#stream.once('error', reject);
    });
    // Whoever awaits next sees it; without this a full disk would end the process.
    this.#closed.catch((error: Error) => (this.#failure = error));
    this.#zip = new Zip((error, chunk, final) => {
      if (error) {
        this.#failure = error;
        return;
      }
      this.#hash.update(chunk);
      this.#bytes += chunk.byteLength;
      this.#stream.write(chunk);
      if (final) this.#stream.end();
    });
  }

  /** Adds an entry from its pieces. Between pieces other work of the thread gets its turn. */
  async add(
    path: string,
    pieces: Iterable<string | Uint8Array> | AsyncIterable<string | Uint8Array>,
  ): Promise<WrittenEntry> {
    const entry = new ZipDeflate(path, { level: 6, mem: 8 });
    entry.mtime = entryDate;
    this.#zip.add(entry);
    const hash = createHash('sha256');
    let bytes = 0;
    for await (const piece of pieces) {
      const content = typeof piece === 'string' ? Buffer.from(piece, 'utf8') : piece;
      for (let at = 0; at < content.byteLength; at += pieceBytes) {
        // A copy: the deflater may keep what it is given.
        const part = new Uint8Array(content.subarray(at, at + pieceBytes));
        hash.update(part);
        bytes += part.byteLength;
        entry.push(part, false);
        await this.#breathe();
      }
    }
    entry.push(new Uint8Array(0), true);
    return { path, sha256: hash.digest('hex'), bytes };
  }

  /** Ends the zip; the file is complete when this resolves. */
  async end(): Promise<{ sha256: string; bytes: number }> {
    this.#zip.end();
    await this.#closed;
    if (this.#failure) throw this.#failure;
    return { sha256: this.#hash.digest('hex'), bytes: this.#bytes };
  }

  async #breathe(): Promise<void> {
    if (this.#failure) throw this.#failure;
    if (this.#stream.writableNeedDrain) await Promise.race([once(this.#stream, 'drain'), this.#closed]);
    else await new Promise((resolve) => setImmediate(resolve));
  }
}
