/** Refuses unsafe requests that a browser made for another site: the framework never checks JSON posts. */
import { accept, refuse, type Result } from '@/domain/refusals.ts';

const safeMethods = new Set(['GET', 'HEAD', 'OPTIONS']);

/**
 * A bearer request carries no ambient authority and needs no Origin; a cookie or anonymous one with an unsafe method
 * needs the public URL's. `exempt` is the payment webhook, which proves itself by signature.
 */
export function checkOrigin(options: {
  method: string;
  origin: string | null;
  bearer: boolean;
  exempt: boolean;
  publicUrl: string;
}): Result<null> {
  if (safeMethods.has(options.method) || options.bearer || options.exempt) return accept(null);
  if (options.origin === new URL(options.publicUrl).origin) return accept(null);
  return refuse('origin_refused', 'This request did not come from a page of this site, so it was refused.');
}
