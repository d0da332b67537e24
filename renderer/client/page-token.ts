const KEY = "tautline-token";

/** What of a page's surroundings the token needs; `window` has all of it. */
export interface TokenPlaces {
  readonly location: { readonly hash: string; readonly pathname: string; readonly search: string };
  readonly history: { replaceState(data: unknown, unused: string, url: string): void };
  readonly sessionStorage: Pick<Storage, "getItem" | "setItem">;
}

/**
 * The token of this run: taken from the fragment (`#token=...`), which never travels in a request nor a referrer, and kept in
 * session storage so that a reload finds it. The fragment is wiped so that a copied address or a history entry holds no token.
 * Empty when there is none.
 */
export function takePageToken(places: TokenPlaces): string {
  const { location, history, sessionStorage } = places;
  const given = /(?:^#|&)token=([A-Za-z0-9_-]+)/.exec(location.hash)?.[1];
  if (given === undefined) return sessionStorage.getItem(KEY) ?? "";
  sessionStorage.setItem(KEY, given);
  const rest = location.hash
    .replace(/^#/, "")
    .split("&")
    .filter((part) => !part.startsWith("token="))
    .join("&");
  history.replaceState(null, "", `${location.pathname}${location.search}${rest === "" ? "" : `#${rest}`}`);
  return given;
}
