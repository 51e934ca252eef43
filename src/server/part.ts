/** A part of the house that runs beside the requests. */
export interface Part {
  name: string;
  /** Resolves to the function that stops it. */
  start(): Promise<() => Promise<void>>;
}
