/**
 * What a page may do. Loosenings of `default-src 'none'`, each with its reason:
 * - script-src, style-src, font-src, img-src 'self': the page's own files; nothing inline, no eval, no data or blob addresses.
 * - connect-src 'self': requests to the handler, nowhere else.
 * - worker-src 'self': the page's own worker files.
 */
export const CONTENT_SECURITY_POLICY = [
  "default-src 'none'",
  "script-src 'self'",
  "style-src 'self'",
  "font-src 'self'",
  "img-src 'self'",
  "connect-src 'self'",
  "worker-src 'self'",
  "base-uri 'none'",
  "form-action 'none'",
  "frame-ancestors 'none'",
].join("; ");

/** Headers of every answer. */
export const COMMON_HEADERS: Readonly<Record<string, string>> = {
  "content-security-policy": CONTENT_SECURITY_POLICY,
  "x-content-type-options": "nosniff",
  "referrer-policy": "no-referrer",
  "cross-origin-opener-policy": "same-origin",
  "cross-origin-resource-policy": "same-origin",
  "permissions-policy": "camera=(), microphone=(), geolocation=(), usb=(), serial=(), hid=()",
  "cache-control": "no-store",
};
