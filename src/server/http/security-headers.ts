/** Headers that every answer carries. The content security policy of pages is Astro's (hashes), see astro.config.mjs. */
export function addSecurityHeaders(headers: Headers, options: { https: boolean; isHtml: boolean }): void {
  headers.set('X-Content-Type-Options', 'nosniff');
  headers.set('X-Frame-Options', 'DENY');
  headers.set('Referrer-Policy', 'strict-origin-when-cross-origin');
  headers.set('Cross-Origin-Opener-Policy', 'same-origin');
  headers.set('Cross-Origin-Resource-Policy', 'same-origin');
  headers.set('Permissions-Policy', 'camera=(), geolocation=(), microphone=(), payment=()');
  if (options.https) headers.set('Strict-Transport-Security', 'max-age=31536000; includeSubDomains');
  if (!options.isHtml && !headers.has('Content-Security-Policy'))
    headers.set('Content-Security-Policy', "default-src 'none'; frame-ancestors 'none'");
}
