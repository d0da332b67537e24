import { isTautlineError, TautlineError } from "#shared/errors.ts";

/** A failure of the browser's store as the error a person is shown; errors that say so already pass through. */
export function storageFault(error: unknown): TautlineError {
  if (isTautlineError(error)) return error;
  const reason = error instanceof Error ? `${error.name}: ${error.message}` : String(error);
  return new TautlineError(
    "write-failed",
    `The browser could not keep the edits of this window (${reason}). They are sent to the library as long as this page is open.`,
    { file: "the browser's store", reason, next: "Free some disk space, or leave private browsing." },
    error,
  );
}
