/** The price book: rates per lane and method family, and what credit packs cost. */

export const lanes = ['steady', 'express', 'overnight'] as const;
export type Lane = (typeof lanes)[number];

/** `leap` meters the Poisson draws made plus the exact firings of fall-back steps. */
export const methodFamilies = ['exact', 'leap'] as const;
export type MethodFamily = (typeof methodFamilies)[number];

export const currencies = ['EUR', 'GBP', 'USD'] as const;
export type Currency = (typeof currencies)[number];

export interface CreditPack {
  /** `100`: the number of credits as text. */
  id: string;
  credits: number;
  /** Price before tax, in minor units. */
  netMinor: Record<Currency, number>;
}

export interface PriceBook {
  id: string;
  /** 1, 2, 3 … */
  version: number;
  /** RFC 3339; the book holds from here until the next one starts. */
  startsAt: string;
  microcreditsPerMillionEvents: Record<Lane, Record<MethodFamily, number>>;
  packs: CreditPack[];
}

export const microcreditsPerCredit = 1_000_000;

/** The rate of a lane and method family in a book. */
export const rateOf = (book: PriceBook, lane: Lane, family: MethodFamily): number =>
  book.microcreditsPerMillionEvents[lane][family];

/** The newest book that has started at `at` (RFC 3339), or null. */
export function priceBookAt(books: readonly PriceBook[], at: string): PriceBook | null {
  const started = books.filter(({ startsAt }) => startsAt <= at);
  return started.reduce<PriceBook | null>(
    (newest, book) =>
      !newest || book.startsAt > newest.startsAt || (book.startsAt === newest.startsAt && book.version > newest.version)
        ? book
        : newest,
    null,
  );
}
