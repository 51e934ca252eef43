/**
 * The records of a zip file, as bytes.
 * Source: PKWARE's APPNOTE.TXT, sections 4.3.7 (local header), 4.3.12 (central directory), 4.3.14 to 4.3.16 (its ends) and
 * 4.5.3 (the extra field of zip64).
 */

export const signatures = {
  localHeader: 0x04034b50,
  centralHeader: 0x02014b50,
  end: 0x06054b50,
  end64: 0x06064b50,
  locator64: 0x07064b50,
} as const;

/** What a 32-bit field holds when its value stands in the zip64 extra field. */
export const elsewhere = 0xffffffff;
export const zip64Extra = 0x0001;

export interface EntryRecord {
  path: string;
  crc32: number;
  bytes: number;
  deflatedBytes: number;
  /** Of the local header, from the file's start. */
  offset: number;
}

/** 1 January 1980, 00:00: the format's first day, so that equal content gives equal bytes. */
const entryDay = (1 << 5) | 1;
/** Names are UTF-8. */
const flags = 0x0800;
const deflated = 8;
const fileMode = 0o100644;

export class Bytes {
  readonly #parts: Buffer[] = [];
  u16(...values: number[]): this {
    for (const value of values) this.#add(2).writeUInt16LE(value);
    return this;
  }
  u32(...values: number[]): this {
    for (const value of values) this.#add(4).writeUInt32LE(value);
    return this;
  }
  u64(...values: number[]): this {
    for (const value of values) this.#add(8).writeBigUInt64LE(BigInt(value));
    return this;
  }
  raw(...parts: Buffer[]): this {
    this.#parts.push(...parts);
    return this;
  }
  #add(length: number): Buffer {
    const part = Buffer.alloc(length);
    this.#parts.push(part);
    return part;
  }
  get buffer(): Buffer {
    return Buffer.concat(this.#parts);
  }
}

/** `zip64From`: values from here on go to the zip64 fields; the format's own limit but in tests. */
export function localHeader(entry: EntryRecord, zip64From: number): Buffer {
  const { path, crc32, bytes, deflatedBytes } = entry;
  const large = bytes >= zip64From || deflatedBytes >= zip64From;
  // Both sizes stand in a local header's extra field (4.5.3).
  const extra = large ? new Bytes().u16(zip64Extra, 16).u64(bytes, deflatedBytes).buffer : Buffer.alloc(0);
  const name = Buffer.from(path, 'utf8');
  return new Bytes()
    .u32(signatures.localHeader)
    .u16(large ? 45 : 20, flags, deflated, 0, entryDay)
    .u32(crc32, large ? elsewhere : deflatedBytes, large ? elsewhere : bytes)
    .u16(name.byteLength, extra.byteLength)
    .raw(name, extra).buffer;
}

export function centralHeader(entry: EntryRecord, zip64From: number): Buffer {
  const { path, crc32, bytes, deflatedBytes, offset } = entry;
  const largeSizes = bytes >= zip64From || deflatedBytes >= zip64From;
  const largeOffset = offset >= zip64From;
  const values = [...(largeSizes ? [bytes, deflatedBytes] : []), ...(largeOffset ? [offset] : [])];
  const extra =
    values.length > 0 ? new Bytes().u16(zip64Extra, 8 * values.length).u64(...values).buffer : Buffer.alloc(0);
  const name = Buffer.from(path, 'utf8');
  const version = values.length > 0 ? 45 : 20;
  return new Bytes()
    .u32(signatures.centralHeader)
    .u16((3 << 8) | version, version, flags, deflated, 0, entryDay)
    .u32(crc32, largeSizes ? elsewhere : deflatedBytes, largeSizes ? elsewhere : bytes)
    .u16(name.byteLength, extra.byteLength, 0, 0, 0)
    .u32(fileMode * 0x10000, largeOffset ? elsewhere : offset)
    .raw(name, extra).buffer;
}

export function endRecords(directory: { entries: number; offset: number; bytes: number }, zip64From: number): Buffer {
  const { entries, offset, bytes } = directory;
  const large = entries >= 0xffff || offset >= zip64From || bytes >= zip64From;
  const records = new Bytes();
  if (large) {
    records
      .u32(signatures.end64)
      .u64(44)
      .u16((3 << 8) | 45, 45)
      .u32(0, 0)
      .u64(entries, entries, bytes, offset)
      .u32(signatures.locator64, 0)
      .u64(offset + bytes)
      .u32(1);
  }
  const count = large ? 0xffff : entries;
  return records
    .u32(signatures.end)
    .u16(0, 0, count, count)
    .u32(large ? elsewhere : bytes, large ? elsewhere : offset)
    .u16(0).buffer;
}
