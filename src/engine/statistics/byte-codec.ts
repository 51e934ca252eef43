/** Compact bytes for summaries: unsigned integers in groups of seven bits, big integers with sign, text with its length. */

export class ByteWriter {
  #bytes = new Uint8Array(4096);
  #length = 0;

  byte(value: number): void {
    if (this.#length === this.#bytes.length) {
      const larger = new Uint8Array(this.#bytes.length * 2);
      larger.set(this.#bytes);
      this.#bytes = larger;
    }
    this.#bytes[this.#length++] = value;
  }

  /** An integer from 0 to 2^53 − 1. */
  unsigned(value: number): void {
    while (value >= 128) {
      this.byte((value % 128) + 128);
      value = Math.floor(value / 128);
    }
    this.byte(value);
  }

  big(value: bigint): void {
    const magnitude = value < 0n ? -value : value;
    let digits = magnitude.toString(16);
    if (digits.length % 2) digits = `0${digits}`;
    this.byte(value < 0n ? 1 : 0);
    this.unsigned(digits.length / 2);
    for (let i = 0; i < digits.length; i += 2) this.byte(Number.parseInt(digits.slice(i, i + 2), 16));
  }

  text(value: string): void {
    const bytes = new TextEncoder().encode(value);
    this.unsigned(bytes.length);
    for (const byte of bytes) this.byte(byte);
  }

  bytes(): Uint8Array {
    return this.#bytes.slice(0, this.#length);
  }
}

/** Reads what `ByteWriter` wrote; throws RangeError where the bytes end too early. */
export class ByteReader {
  #position = 0;

  constructor(readonly source: Uint8Array) {}

  byte(): number {
    const value = this.source[this.#position++];
    if (value === undefined) throw new RangeError('the summary is cut short');
    return value;
  }

  unsigned(): number {
    let value = 0;
    let unit = 1;
    for (;;) {
      const byte = this.byte();
      value += (byte % 128) * unit;
      if (byte < 128) return value;
      unit *= 128;
    }
  }

  big(): bigint {
    const negative = this.byte() === 1;
    const length = this.unsigned();
    let digits = '';
    for (let i = 0; i < length; i++) digits += this.byte().toString(16).padStart(2, '0');
    const magnitude = BigInt(`0x${digits || '0'}`);
    return negative ? -magnitude : magnitude;
  }

  text(): string {
    const length = this.unsigned();
    return new TextDecoder().decode(Uint8Array.from({ length }, () => this.byte()));
  }

  get atEnd(): boolean {
    return this.#position === this.source.length;
  }
}
