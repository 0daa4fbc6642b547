export type PageSecurity = { nonce: string; overHttps: boolean; development: boolean };

/**
 * Content-Security-Policy of a page. Scripts need the page's nonce; styles may stand in attributes, because charts
 * and virtual lists place things by them.
 */
export function contentSecurityPolicy({ nonce, overHttps, development }: PageSecurity): string {
  // React's development build names the places of errors by eval.
  const scripts = `'self' 'nonce-${nonce}'${development ? " 'unsafe-eval'" : ""}`;
  return [
    "default-src 'self'",
    `script-src ${scripts}`,
    "style-src 'self' 'unsafe-inline'",
    "img-src 'self' data: blob:",
    "font-src 'self'",
    "connect-src 'self'",
    "object-src 'none'",
    "base-uri 'none'",
    "form-action 'self'",
    "frame-ancestors 'none'",
    ...(overHttps ? ["upgrade-insecure-requests"] : []),
  ].join("; ");
}
