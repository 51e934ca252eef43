/** Where to go after signing in: only a path of this site, so that a link cannot send somebody elsewhere. */

/** `next` when it is an absolute path of this site, else null. Backslashes and control characters count as foreign. */
export function localPath(next: string | null): string | null {
  if (!next || !/^\/(?![/\\])[^\\\p{Cc}]*$/u.test(next)) return null;
  const url = new URL(next, 'http://here.invalid');
  return url.origin === 'http://here.invalid' ? url.pathname + url.search + url.hash : null;
}
