import { TautlineError } from "#shared/errors.ts";

/**
 * The path below the page's folder that a URL's pathname names, with forward slashes; `index.html` for the root.
 * Decoded exactly once; what then still holds a backslash, NUL, colon, percent sign, empty part or dot part is refused, so
 * that no second decoding and no drive letter can leave the folder.
 * @throws bad-request
 */
export function pagePath(pathname: string): string {
  if (pathname === "/") return "index.html";
  let decoded: string;
  try {
    decoded = decodeURIComponent(pathname.slice(1));
  } catch {
    throw refusedPath();
  }
  const parts = decoded.split("/");
  const bad = parts.some((part) => part === "" || part === "." || part === ".." || /[\\%:\0]/.test(part));
  if (!pathname.startsWith("/") || bad) throw refusedPath();
  return decoded;
}

function refusedPath(): TautlineError<"bad-request"> {
  return new TautlineError("bad-request", "The address does not name a file of the page.", {
    what: "path refused",
    where: "path",
  });
}
