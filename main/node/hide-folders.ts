import { basename } from "node:path";
import { isTautlineError, TautlineError } from "#shared/errors.ts";

/**
 * The error with every mention of `path` cut to its last part: errors that cross to a page name a file, not where on the
 * computer it lies.
 */
export function hideFolders(error: unknown, path: string): unknown {
  if (!isTautlineError(error)) return error;
  const short = (text: string) => text.replaceAll(path, basename(path));
  const fields = Object.fromEntries(
    Object.entries(error.fields).map(([key, value]) => [key, typeof value === "string" ? short(value) : value]),
  );
  return new TautlineError(error.tag, short(error.message), fields as typeof error.fields, error.cause);
}
