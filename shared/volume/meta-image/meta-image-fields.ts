import { unreadable } from "#shared/errors.ts";
import { latin1, quote } from "#shared/volume/nrrd/nrrd-fields.ts";

/** The lines of a MetaImage header, taken apart but not yet understood. */
export interface MetaImageFields {
  /** Value of each field, names in lower case. */
  readonly fields: ReadonlyMap<string, string>;
  /** Lines after `ElementDataFile = LIST`, else empty. */
  readonly listed: readonly string[];
  /** Bytes up to and including the line `ElementDataFile`. */
  readonly length: number;
}

/** Longest header looked at. */
export const META_IMAGE_HEADER_LIMIT = 1024 * 1024;

/** True when the bytes begin as a MetaImage header does: with a field that such headers begin with. */
export function isMetaImage(head: Uint8Array): boolean {
  return /^\s*(ObjectType|ObjectSubType|NDims|DimSize|Comment|BinaryData|ElementType)[ \t]*[=:]/i.test(
    latin1(head.subarray(0, 64)),
  );
}

/**
 * Takes a MetaImage header apart: `name = value` lines up to `ElementDataFile`, the last one.
 * @param bytes the start of the file. @throws unreadable-input for other lines, a field given twice, or no `ElementDataFile`.
 * @source MetaIO's description of its headers (memory).
 */
export function splitMetaImage(bytes: Uint8Array, file: string): MetaImageFields {
  const fields = new Map<string, string>();
  const end = Math.min(bytes.length, META_IMAGE_HEADER_LIMIT);
  let at = 0;
  for (let number = 1; at < end; number++) {
    const { line, next } = lineAt(bytes, at, end);
    at = next;
    if (line.trim() === "") continue;
    const split = /^\s*([A-Za-z_][\w.-]{0,63})[ \t]*[=:](.*)$/.exec(line);
    if (!split) throw unreadable(file, "'name = value' lines", quote(line), `header line ${number}`);
    const name = split[1]!.toLowerCase();
    if (fields.has(name) && name !== "comment") throw unreadable(file, `one line '${split[1]}'`, "two", `header line ${number}`);
    const value = split[2]!.trim();
    fields.set(name, value);
    if (name !== "elementdatafile") continue;
    return { fields, listed: /^LIST\b/i.test(value) ? linesFrom(bytes, at, end) : [], length: at };
  }
  throw unreadable(file, "a line 'ElementDataFile = ...' that ends the header", "none");
}

function linesFrom(bytes: Uint8Array, from: number, end: number): string[] {
  const lines: string[] = [];
  for (let at = from; at < end; ) {
    const { line, next } = lineAt(bytes, at, end);
    at = next;
    if (line.trim() !== "") lines.push(line.trim());
  }
  return lines;
}

/** One line as Latin-1 text without its end; names in UTF-8 are decoded as such. */
function lineAt(bytes: Uint8Array, at: number, end: number): { line: string; next: number } {
  const found = bytes.indexOf(10, at);
  const stop = found === -1 || found > end ? end : found;
  const raw = bytes.subarray(at, stop);
  let line: string;
  try {
    line = new TextDecoder("utf-8", { fatal: true }).decode(raw);
  } catch {
    line = latin1(raw.subarray(0, 4096));
  }
  return { line: line.replace(/\r$/, ""), next: stop + 1 };
}
