import { isTautlineError, TautlineError } from "#shared/errors.ts";
import { checkChordaeFile } from "#shared/formats/chordae/check-chordae-file.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";

/** Objects deeper than this stand on one line, so that a node or a strand is one line of the file. */
const OPEN_LEVELS = 4;

/**
 * The text of a tree file: UTF-8 JSON, one line per node and strand, keys in the order they have, a newline at the end. The
 * same file gives the same text.
 * @throws internal when the file would not be read back (a fault of the program: nothing malformed is ever written).
 */
export function writeChordaeFile(file: ChordaeFile): string {
  try {
    checkChordaeFile(file, "the file to be written");
  } catch (error) {
    if (!isTautlineError(error, "unreadable-input")) throw error;
    throw new TautlineError("internal", `The trees could not be written as a valid file. ${error.message}`, {
      what: error.message,
    });
  }
  return `${textOf(file, 0)}\n`;
}

function textOf(value: unknown, depth: number): string {
  const isList = Array.isArray(value);
  if (typeof value !== "object" || value === null || depth >= OPEN_LEVELS) return JSON.stringify(value);
  if (isList && value.every((entry) => typeof entry !== "object" || entry === null)) return JSON.stringify(value);
  const indent = "  ".repeat(depth + 1);
  const parts = isList
    ? value.map((entry) => textOf(entry, depth + 1))
    : Object.entries(value)
        .filter(([, entry]) => entry !== undefined)
        .map(([key, entry]) => `${JSON.stringify(key)}: ${textOf(entry, depth + 1)}`);
  const [open, close] = isList ? "[]" : "{}";
  if (parts.length === 0) return `${open}${close}`;
  return `${open}\n${parts.map((part) => indent + part).join(",\n")}\n${"  ".repeat(depth)}${close}`;
}
