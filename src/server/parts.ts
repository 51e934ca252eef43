/** What runs beside the requests: each part starts at boot, in this order, and stops in the reverse one. */

export interface Part {
  name: string;
  /** Resolves to the function that stops it. */
  start(): Promise<() => Promise<void>>;
}

export const parts: Part[] = [];
