/** The app's own scheme and host; every page, script and request of the window has this address. */
export const APP_SCHEME = "tautline";
export const APP_HOST = "app";
/** A standard, secure scheme, as pages, storage and fetch need it; the content policy applies to it as to any other. */
export const SCHEME_PRIVILEGES = { standard: true, secure: true, supportFetchAPI: true, stream: true } as const;
export const APP_URL = `${APP_SCHEME}://${APP_HOST}/`;

/**
 * True when an address is the app's own. Decided on its parsed parts: a prefix would take `tautline://app.evil/` for it, and the
 * origin of every scheme that is not of the web is the same word `null`.
 */
export function isOwnAddress(address: string): boolean {
  let url: URL;
  try {
    url = new URL(address);
  } catch {
    return false;
  }
  return url.protocol === `${APP_SCHEME}:` && url.host === APP_HOST && url.username === "" && url.password === "";
}
