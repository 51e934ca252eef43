/**
 * Writes a zip to a file as a stream: fixed dates, one pinned deflate, so that equal content gives equal bytes.
 *
 * Every header holds its entry's sizes, which some readers need; so an entry is deflated first, into memory or, when it is
 * large, into a file beside the zip, and then copied behind its header. Memory does not grow with the zip.
 */
import { createHash, type Hash } from 'node:crypto';
import { open, rm, type FileHandle } from 'node:fs/promises';
import { crc32 } from 'node:zlib';
import { Deflate } from 'fflate';
import { centralHeader, elsewhere, endRecords, localHeader, type EntryRecord } from './zip-records.ts';

export interface WrittenEntry {
  path: string;
  /** Of the entry's content. */
  sha256: string;
  bytes: number;
}

export type Pieces = Iterable<string | Uint8Array> | AsyncIterable<string | Uint8Array>;

const pieceBytes = 64 * 1024;

export interface ZipOptions {
  /** Sizes and offsets from here on are written as zip64; tests lower it. */
  zip64From?: number;
  /** Deflated entries up to this long wait in memory. */
  spoolBytes?: number;
}

export class ZipWriter {
  readonly #file: FileHandle;
  readonly #zip64From: number;
  readonly #spool: Spool;
  readonly #hash: Hash = createHash('sha256');
  readonly #entries: EntryRecord[] = [];
  #bytes = 0;

  private constructor(file: FileHandle, spool: Spool, zip64From: number) {
    this.#file = file;
    this.#spool = spool;
    this.#zip64From = zip64From;
  }

  /** Starts a zip at `file`, replacing what is there. Close it by `end` or `abandon`. */
  static async create(
    file: string,
    { zip64From = elsewhere, spoolBytes = 2 ** 23 }: ZipOptions = {},
  ): Promise<ZipWriter> {
    return new ZipWriter(await open(file, 'w'), new Spool(`${file}.spool.tmp`, spoolBytes), zip64From);
  }

  /** Adds an entry from its pieces; one entry at a time. Between pieces other work of the thread gets its turn. */
  async add(path: string, pieces: Pieces): Promise<WrittenEntry> {
    const hash = createHash('sha256');
    const entry: EntryRecord = { path, crc32: 0, bytes: 0, deflatedBytes: 0, offset: this.#bytes };
    const waiting: Uint8Array[] = [];
    const deflate = new Deflate({ level: 6, mem: 8 }, (chunk) => waiting.push(chunk));
    const spool = async (): Promise<void> => {
      for (const chunk of waiting.splice(0)) {
        entry.deflatedBytes += chunk.byteLength;
        await this.#spool.write(chunk);
      }
    };
    for await (const piece of pieces) {
      const content = typeof piece === 'string' ? Buffer.from(piece, 'utf8') : piece;
      for (let at = 0; at < content.byteLength; at += pieceBytes) {
        // A copy: the deflater may keep what it is given.
        const part = new Uint8Array(content.subarray(at, at + pieceBytes));
        hash.update(part);
        entry.crc32 = crc32(part, entry.crc32);
        entry.bytes += part.byteLength;
        deflate.push(part, false);
        await spool();
        await new Promise((resolve) => setImmediate(resolve));
      }
    }
    deflate.push(new Uint8Array(0), true);
    await spool();
    await this.#write(localHeader(entry, this.#zip64From));
    for await (const chunk of this.#spool.drain()) await this.#write(chunk);
    this.#entries.push(entry);
    return { path, sha256: hash.digest('hex'), bytes: entry.bytes };
  }

  /** Ends the zip; the file is complete when this resolves. */
  async end(): Promise<{ sha256: string; bytes: number }> {
    const offset = this.#bytes;
    for (const entry of this.#entries) await this.#write(centralHeader(entry, this.#zip64From));
    const directory = { entries: this.#entries.length, offset, bytes: this.#bytes - offset };
    await this.#write(endRecords(directory, this.#zip64From));
    await this.abandon();
    return { sha256: this.#hash.digest('hex'), bytes: this.#bytes };
  }

  /** Closes the files without completing the zip. */
  async abandon(): Promise<void> {
    await this.#file.close();
    await this.#spool.close();
  }

  async #write(chunk: Uint8Array): Promise<void> {
    this.#hash.update(chunk);
    for (let at = 0; at < chunk.byteLength;) at += (await this.#file.write(chunk, at)).bytesWritten;
    this.#bytes += chunk.byteLength;
  }
}

/** Bytes that wait for their turn: in memory up to a limit, beyond it in a file. */
class Spool {
  readonly #path: string;
  readonly #memoryBytes: number;
  #chunks: Uint8Array[] = [];
  #bytes = 0;
  #file: FileHandle | null = null;
  #fileBytes = 0;

  constructor(path: string, memoryBytes: number) {
    this.#path = path;
    this.#memoryBytes = memoryBytes;
  }

  async write(chunk: Uint8Array): Promise<void> {
    this.#chunks.push(chunk);
    this.#bytes += chunk.byteLength;
    if (this.#bytes > this.#memoryBytes) await this.#toFile();
  }

  async #toFile(): Promise<void> {
    this.#file ??= await open(this.#path, 'w+');
    for (const chunk of this.#chunks)
      for (let at = 0; at < chunk.byteLength;) {
        const { bytesWritten } = await this.#file.write(chunk, at, chunk.byteLength - at, this.#fileBytes);
        at += bytesWritten;
        this.#fileBytes += bytesWritten;
      }
    this.#chunks = [];
    this.#bytes = 0;
  }

  /** All bytes in order; the spool is empty afterwards. */
  async *drain(): AsyncIterable<Uint8Array> {
    const buffer = Buffer.alloc(this.#fileBytes > 0 ? 2 ** 20 : 0);
    for (let at = 0; at < this.#fileBytes;) {
      const { bytesRead } = await this.#file!.read(buffer, 0, Math.min(buffer.length, this.#fileBytes - at), at);
      if (bytesRead === 0) throw new Error('A file beside the zip lost its bytes.');
      at += bytesRead;
      yield buffer.subarray(0, bytesRead);
    }
    yield* this.#chunks;
    this.#chunks = [];
    this.#bytes = 0;
    this.#fileBytes = 0;
  }

  async close(): Promise<void> {
    await this.#file?.close();
    await rm(this.#path, { force: true });
  }
}
