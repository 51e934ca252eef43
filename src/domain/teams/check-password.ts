/**
 * Says why a password is too easily guessed, or null.
 *
 * Judged as published guidance for memorised secrets asks (NIST SP 800-63B, from memory): by length, against common
 * passwords, repetition, sequences and words of its surroundings; never by classes of characters.
 */
import { limits } from '../limits.ts';
import { commonPasswordParts } from './common-password-parts.ts';

export interface PasswordSurroundings {
  email?: string;
  /** The person's name, the team's name. */
  names?: string[];
}

const lookAlikes: Record<string, string> = {
  '0': 'o',
  '1': 'i',
  '3': 'e',
  '4': 'a',
  '5': 's',
  '7': 't',
  '@': 'a',
  $: 's',
  '!': 'i',
};
const rows = ['abcdefghijklmnopqrstuvwxyz', '01234567890', 'qwertyuiop', 'asdfghjkl', 'zxcvbnm'];
const runs = [...rows, ...rows.map((row) => [...row].reverse().join(''))];
/** Fewer characters than this beyond the guessable parts leave nothing to guess. */
const leastOwnCharacters = 4;
const leastDistinctCharacters = 5;

export function weaknessOfPassword(password: string, surroundings: PasswordSurroundings = {}): string | null {
  const lower = password.normalize('NFKC').toLowerCase();
  if ([...password].length < limits.passwordCharactersMinimum)
    return `Use at least ${limits.passwordCharactersMinimum} characters; a few unrelated words work well.`;
  if (new Set(lower).size < leastDistinctCharacters || /^(.{1,6})\1+$/u.test(lower))
    return 'This repeats the same few characters; a few unrelated words work well.';
  if (ownCharacters(lower, [...wordsAround(surroundings), ...commonPasswordParts]) < leastOwnCharacters)
    return 'This is built from parts that are guessed first: common passwords, sequences, names or dates. A few unrelated words work well.';
  return null;
}

function wordsAround({ email = '', names = [] }: PasswordSurroundings): string[] {
  const words = ['burette', ...email.split(/[@.+_-]/), ...names.flatMap((name) => name.split(/\s+/))];
  return words
    .map((word) => word.toLowerCase())
    .filter((word) => word.length >= 4)
    .sort((a, b) => b.length - a.length);
}

/** How many letters and figures belong to no guessable part, as written or with look-alike figures read as letters. */
function ownCharacters(text: string, parts: string[]): number {
  const guessable = new Array<boolean>(text.length).fill(false);
  const plain = text.replaceAll(/[013457@$!]/g, (figure) => lookAlikes[figure] ?? figure);
  for (const [start, length] of [
    ...[text, plain].flatMap((reading) => parts.flatMap((part) => occurrences(reading, part))),
    ...runsIn(text),
    ...matches(text, /(.)\1{2,}/g),
    ...matches(text, /(19|20)\d\d/g),
  ])
    guessable.fill(true, start, start + length);
  return [...text.matchAll(/[\p{L}\p{N}]/gu)].filter(({ index }) => !guessable[index]).length;
}

/** Start and length in UTF-16 units. */
type Span = [start: number, length: number];

function occurrences(text: string, part: string): Span[] {
  const found: Span[] = [];
  for (let at = text.indexOf(part); at >= 0; at = text.indexOf(part, at + 1)) found.push([at, part.length]);
  return found;
}

const matches = (text: string, pattern: RegExp): Span[] =>
  [...text.matchAll(pattern)].map((match) => [match.index, match[0].length]);

/** Pieces of four or more neighbours of the alphabet, the figures or a keyboard row. */
function runsIn(text: string): Span[] {
  const found: Span[] = [];
  for (let start = 0; start < text.length;) {
    let length = 1;
    while (start + length < text.length && isRun(text.slice(start, start + length + 1))) length++;
    if (length >= 4) found.push([start, length]);
    start += length;
  }
  return found;
}

const isRun = (piece: string): boolean => runs.some((run) => run.includes(piece));
