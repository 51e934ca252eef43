/**
 * Run as a process of its own: writes a zip of so many megabytes of content that hardly deflates, in two entries, and prints
 * as JSON how large it became and the most memory that the process ever held.
 */
import { ZipWriter } from '@/formats/zip/zip-writer.ts';

const [file, megabytes] = [process.argv[2]!, Number(process.argv[3])];

/** Marsaglia's xorshift32: bytes without repetition. */
function* pieces(count: number): Iterable<Uint8Array> {
  const words = new Uint32Array(2 ** 18);
  let x = 2_463_534_242;
  for (let piece = 0; piece < count; piece++) {
    for (let i = 0; i < words.length; i++) {
      x ^= x << 13;
      x ^= x >>> 17;
      x ^= x << 5;
      words[i] = x;
    }
    yield new Uint8Array(words.buffer);
  }
}

const zip = await ZipWriter.create(file);
await zip.add('small.bin', pieces(1));
await zip.add('large.bin', pieces(megabytes - 1));
const { bytes } = await zip.end();
console.log(JSON.stringify({ bytes, peakMegabytes: process.resourceUsage().maxRSS / 1024 }));
