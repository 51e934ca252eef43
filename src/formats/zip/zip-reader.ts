/**
 * Reads a zip that somebody else may have made: entries by name, with every size checked before it is believed.
 * Source of the records: see zip-records.ts. Entries are stored or deflated; encryption and split files are refused.
 */
import { open, type FileHandle } from 'node:fs/promises';
import { Readable } from 'node:stream';
import { createInflateRaw, crc32 } from 'node:zlib';
import { elsewhere, signatures, zip64Extra } from './zip-records.ts';

/** The file is no zip, is damaged, or asks for more than this reader gives. The message is a sentence for a person. */
export class ZipError extends Error {}

export interface ZipEntry {
  path: string;
  bytes: number;
  deflatedBytes: number;
  crc32: number;
  method: number;
  offset: number;
}

export interface ZipLimits {
  entries: number;
  /** Of all entries together, inflated. */
  bytes: number;
  directoryBytes: number;
}

const defaultLimits: ZipLimits = { entries: 10_000, bytes: 2 ** 40, directoryBytes: 2 ** 26 };
/** Deflate cannot do better than about 1 : 1032 (RFC 1951); a larger claim is a lie. */
const largestRatio = 1_033;
const chunkBytes = 2 ** 18;

export class ZipReader {
  readonly entries = new Map<string, ZipEntry>();
  readonly #file: FileHandle;
  #directoryOffset = 0;

  private constructor(file: FileHandle) {
    this.#file = file;
  }

  /** Opens a zip and reads its directory. Throws ZipError. */
  static async open(path: string, limits: Partial<ZipLimits> = {}): Promise<ZipReader> {
    const file = await open(path, 'r');
    const reader = new ZipReader(file);
    try {
      await reader.#readDirectory({ ...defaultLimits, ...limits });
    } catch (error) {
      await file.close();
      throw error;
    }
    return reader;
  }

  close(): Promise<void> {
    return this.#file.close();
  }

  /** The content of an entry in pieces, its length and CRC-32 checked at the end. Throws ZipError. */
  async *read(path: string): AsyncIterable<Buffer> {
    const entry = this.entries.get(path);
    if (!entry) throw new ZipError(`The archive has no ${path}.`);
    const header = await this.#bytes(entry.offset, 30);
    if (header.readUInt32LE(0) !== signatures.localHeader)
      throw new ZipError(`${path} has no header where it should be.`);
    const start = entry.offset + 30 + header.readUInt16LE(26) + header.readUInt16LE(28);
    const end = start + entry.deflatedBytes;
    if (end > this.#directoryOffset) throw new ZipError(`${path} reaches past the end of the entries.`);
    let bytes = 0;
    let sum = 0;
    for await (const piece of this.#content(entry, start, end)) {
      bytes += piece.byteLength;
      if (bytes > entry.bytes) throw new ZipError(`${path} is longer than the archive says.`);
      sum = crc32(piece, sum);
      yield piece;
    }
    if (bytes !== entry.bytes) throw new ZipError(`${path} is shorter than the archive says.`);
    if (sum !== entry.crc32) throw new ZipError(`${path} is damaged: its CRC-32 differs.`);
  }

  /** The whole entry as text; refuses one longer than `most` bytes. */
  async text(path: string, most = 2 ** 26): Promise<string> {
    const entry = this.entries.get(path);
    if (entry && entry.bytes > most) throw new ZipError(`${path} is too long: ${entry.bytes} bytes.`);
    const pieces: Buffer[] = [];
    for await (const piece of this.read(path)) pieces.push(piece);
    return Buffer.concat(pieces).toString('utf8');
  }

  async *#content(entry: ZipEntry, start: number, end: number): AsyncIterable<Buffer> {
    if (entry.method === 0) {
      yield* this.#range(start, end);
      return;
    }
    const packed = Readable.from(this.#range(start, end));
    const inflate = createInflateRaw();
    packed.on('error', (error) => inflate.destroy(error));
    try {
      yield* packed.pipe(inflate) as AsyncIterable<Buffer>;
    } catch (error) {
      throw new ZipError(`${entry.path} cannot be inflated: ${(error as Error).message}.`);
    } finally {
      packed.destroy();
      inflate.destroy();
    }
  }

  async *#range(start: number, end: number): AsyncIterable<Buffer> {
    for (let at = start; at < end; at += chunkBytes) yield await this.#bytes(at, Math.min(chunkBytes, end - at));
  }

  async #bytes(offset: number, length: number): Promise<Buffer> {
    const buffer = Buffer.alloc(length);
    const { bytesRead } = await this.#file.read(buffer, 0, length, offset);
    if (bytesRead < length) throw new ZipError('The archive is cut short.');
    return buffer;
  }

  async #readDirectory(limits: ZipLimits): Promise<void> {
    const { size } = await this.#file.stat();
    const tail = Math.min(size, 22 + 0xffff);
    if (size < 22) throw new ZipError('The file is no zip archive: it is too short.');
    const buffer = await this.#bytes(size - tail, tail);
    let at = buffer.byteLength - 22;
    while (at >= 0 && buffer.readUInt32LE(at) !== signatures.end) at--;
    if (at < 0) throw new ZipError('The file is no zip archive, or it is cut short: its directory is missing.');
    let count = buffer.readUInt16LE(at + 10);
    let length = buffer.readUInt32LE(at + 12);
    let offset = buffer.readUInt32LE(at + 16);
    const endOffset = size - tail + at;
    if (count === 0xffff || length === elsewhere || offset === elsewhere) {
      if (endOffset < 76) throw new ZipError('The archive’s directory is damaged.');
      const locator = await this.#bytes(endOffset - 20, 20);
      if (locator.readUInt32LE(0) !== signatures.locator64) throw new ZipError('The archive’s directory is damaged.');
      const end64 = await this.#bytes(number64(locator, 8), 56);
      if (end64.readUInt32LE(0) !== signatures.end64) throw new ZipError('The archive’s directory is damaged.');
      count = number64(end64, 32);
      length = number64(end64, 40);
      offset = number64(end64, 48);
    }
    if (count > limits.entries) throw new ZipError(`The archive has ${count} entries: too many.`);
    if (length > limits.directoryBytes) throw new ZipError('The archive’s directory is too long.');
    if (offset + length > endOffset) throw new ZipError('The archive’s directory is damaged or cut short.');
    this.#directoryOffset = offset;
    this.#parse(await this.#bytes(offset, length), count, limits);
  }

  #parse(directory: Buffer, count: number, limits: ZipLimits): void {
    let total = 0;
    let at = 0;
    for (let i = 0; i < count; i++) {
      if (at + 46 > directory.byteLength || directory.readUInt32LE(at) !== signatures.centralHeader)
        throw new ZipError('The archive’s directory is damaged or cut short.');
      const [nameLength, extraLength, commentLength] = [28, 30, 32].map((place) => directory.readUInt16LE(at + place));
      const next = at + 46 + nameLength! + extraLength! + commentLength!;
      if (next > directory.byteLength) throw new ZipError('The archive’s directory is damaged or cut short.');
      const path = directory.toString('utf8', at + 46, at + 46 + nameLength!);
      const entry = withZip64(
        {
          path,
          method: directory.readUInt16LE(at + 10),
          crc32: directory.readUInt32LE(at + 16),
          deflatedBytes: directory.readUInt32LE(at + 20),
          bytes: directory.readUInt32LE(at + 24),
          offset: directory.readUInt32LE(at + 42),
        },
        directory.subarray(at + 46 + nameLength!, at + 46 + nameLength! + extraLength!),
      );
      check(entry, directory.readUInt16LE(at + 8));
      if (this.entries.has(path)) throw new ZipError(`The archive has two entries called ${shown(path)}.`);
      total += entry.bytes;
      if (total > limits.bytes) throw new ZipError('The archive says it is larger than what is accepted.');
      this.entries.set(path, entry);
      at = next;
    }
  }
}

const shown = (path: string): string => JSON.stringify(path.slice(0, 200));

function check({ path, method, bytes, deflatedBytes }: ZipEntry, flags: number): void {
  const segments = path.split('/');
  if (path === '' || path.startsWith('/') || /[\\\0]|^[A-Za-z]:/.test(path) || segments.includes('..'))
    throw new ZipError(`The archive has an entry whose path leads outside it: ${shown(path)}.`);
  if (flags & 1) throw new ZipError(`${shown(path)} is encrypted.`);
  if (method !== 0 && method !== 8) throw new ZipError(`${shown(path)} is packed by a method that is not read here.`);
  if (method === 0 ? bytes !== deflatedBytes : bytes > deflatedBytes * largestRatio)
    throw new ZipError(`${shown(path)} claims a size that it cannot have.`);
}

function withZip64(entry: ZipEntry, extra: Buffer): ZipEntry {
  const wanted = (['bytes', 'deflatedBytes', 'offset'] as const).filter((field) => entry[field] === elsewhere);
  for (let at = 0; wanted.length > 0 && at + 4 <= extra.byteLength;) {
    const length = extra.readUInt16LE(at + 2);
    if (extra.readUInt16LE(at) === zip64Extra && length >= 8 * wanted.length && at + 4 + length <= extra.byteLength) {
      const values = wanted.map((field, i) => [field, number64(extra, at + 4 + 8 * i)] as const);
      return { ...entry, ...Object.fromEntries(values) };
    }
    at += 4 + length;
  }
  if (wanted.length > 0) throw new ZipError(`The sizes of ${shown(entry.path)} are missing.`);
  return entry;
}

function number64(buffer: Buffer, at: number): number {
  const value = buffer.readBigUInt64LE(at);
  if (value > BigInt(Number.MAX_SAFE_INTEGER)) throw new ZipError('The archive’s directory is damaged.');
  return Number(value);
}
