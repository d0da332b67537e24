import { unreadable } from "#shared/errors.ts";

/** The lines of an NRRD header, taken apart but not yet understood. */
export interface NrrdFields {
  /** Version digit of the magic, 1-5. */
  readonly version: number;
  /** Value of each field, names in lower case, without spaces inside (`space directions` -> `spacedirections`). */
  readonly fields: ReadonlyMap<string, string>;
  /** Lines after `data file: LIST`, else empty. */
  readonly listed: readonly string[];
  /** Bytes of the header including the blank line; of a header without one, all bytes. */
  readonly length: number;
  /** True when a blank line ended it. */
  readonly ended: boolean;
}

/** Longest header looked at; a longer one is refused before anything else is read. */
export const NRRD_HEADER_LIMIT = 1024 * 1024;

/** True when the bytes begin as an NRRD file does. */
export function isNrrd(bytes: Uint8Array): boolean {
  return bytes.length >= 8 && latin1(bytes.subarray(0, 8)).startsWith("NRRD000");
}

/**
 * Takes an NRRD header apart.
 * @param bytes the start of the file (at most {@link NRRD_HEADER_LIMIT} bytes are looked at).
 * @throws unreadable-input for another magic, a version above 5, a line that is no field, a field given twice.
 * @source NRRD file format definition, sections 1-3.
 */
export function splitNrrdHeader(bytes: Uint8Array, file: string): NrrdFields {
  const magic = /^NRRD000(\d)$/.exec(latin1(bytes.subarray(0, 8)));
  if (!magic) throw unreadable(file, "an NRRD header (it begins with NRRD0001 to NRRD0005)", quote(latin1(bytes.subarray(0, 8))));
  const version = Number(magic[1]);
  if (version < 1 || version > 5) throw unreadable(file, "NRRD version 1 to 5", `version ${version}`, "first line");
  const fields = new Map<string, string>();
  const listed: string[] = [];
  let at = 0;
  let number = 0;
  let ended = false;
  const end = Math.min(bytes.length, NRRD_HEADER_LIMIT);
  while (at < end) {
    let stop = bytes.indexOf(10, at);
    if (stop === -1 || stop > end) stop = end;
    const line = utf8(bytes.subarray(at, stop)).replace(/\r$/, "");
    at = Math.min(stop + 1, end);
    number++;
    if (number === 1 || line.startsWith("#")) continue;
    if (line === "") {
      ended = true;
      break;
    }
    if (fields.get("datafile")?.startsWith("LIST")) {
      listed.push(line.trim());
      continue;
    }
    const split = line.indexOf(":");
    if (split > 0 && line[split + 1] === "=") continue; // key/value pairs carry nothing that places voxels
    if (split <= 0 || split > 64) throw unreadable(file, "'field: value' lines", quote(line), `header line ${number}`);
    const name = canonical(line.slice(0, split));
    if (fields.has(name)) throw unreadable(file, `one line '${name}'`, "two", `header line ${number}`);
    fields.set(name, line.slice(split + 1).trim());
  }
  if (!ended && bytes.length > NRRD_HEADER_LIMIT) {
    throw unreadable(file, `an NRRD header of at most ${NRRD_HEADER_LIMIT} bytes`, "no blank line that ends it");
  }
  return { version, fields, listed, length: at, ended };
}

function canonical(name: string): string {
  const plain = name.toLowerCase().replaceAll(/[ \t]/g, "");
  return plain === "centers" ? "centerings" : plain;
}

/** Bytes as Latin-1 text. */
export function latin1(bytes: Uint8Array): string {
  return Array.from(bytes, (b) => String.fromCharCode(b)).join("");
}

/** A found piece of text for a message: cut short, control characters made harmless. */
export function quote(text: string): string {
  const clean = Array.from(text, (c) => (c < " " || (c >= "\u007f" && c < "\u00a0") ? "?" : c)).join("");
  return clean === "" ? "nothing" : `'${clean.length > 40 ? `${clean.slice(0, 40)}...` : clean}'`;
}

/** UTF-8 where it is valid (a micro sign), else Latin-1. */
function utf8(bytes: Uint8Array): string {
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    return latin1(bytes);
  }
}
