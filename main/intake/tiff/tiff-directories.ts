import { basename } from "node:path";
import type { ReadFile } from "#main/intake/read-file.ts";
import { unreadable } from "#shared/errors.ts";
import {
  bodyBytes,
  countBytes,
  entryCount,
  parseEntries,
  type TiffEntry,
  type TiffForm,
  valueBytes,
  valuesOf,
} from "#shared/volume/tiff/tiff-entries.ts";
import { TAG, type TiffTag, type TiffValues } from "#shared/volume/tiff/tiff-page.ts";

const MOST_ENTRIES = 4096;
const MOST_PAGES = 1_000_000;

/** Places of all directories of a TIFF file in order. @throws unreadable-input when the chain leaves the file or runs in a circle. */
export async function tiffChain(file: ReadFile, form: TiffForm): Promise<number[]> {
  const chain: number[] = [];
  const seen = new Set<number>();
  for (let at = form.first; at !== 0; ) {
    const name = basename(file.path);
    if (seen.has(at)) throw unreadable(name, "pages that follow each other", "a circle", `page ${chain.length + 1}`);
    if (chain.length >= MOST_PAGES) throw unreadable(name, `at most ${MOST_PAGES} pages`, "more");
    seen.add(at);
    chain.push(at);
    at = (await readDirectory(file, form, at, chain.length)).next;
  }
  return chain;
}

/** Values of the tags this program reads, of the directory at `at`; arrays are checked against the file before they are read. */
export async function readValues(file: ReadFile, form: TiffForm, at: number, page: number): Promise<TiffValues> {
  const { tags } = await readDirectory(file, form, at, page);
  const values: Partial<Record<TiffTag, Float64Array>> = {};
  for (const tag of Object.keys(TAG) as TiffTag[]) {
    const entry = tags.get(TAG[tag]);
    if (entry) values[tag] = valuesOf(entry, await bytesOf(file, entry, page), form.littleEndian);
  }
  return values;
}

async function readDirectory(file: ReadFile, form: TiffForm, at: number, page: number) {
  const where = `page ${page}`;
  const name = basename(file.path);
  const head = new Uint8Array(countBytes(form));
  if (!(at >= 8 && at + head.length <= file.size))
    throw unreadable(name, "a page inside the file", `one at byte ${at} of ${file.size}`, where);
  await file.readInto(head, at, where);
  const entries = entryCount(head, form);
  if (!(entries >= 1 && entries <= MOST_ENTRIES)) throw unreadable(name, `1 to ${MOST_ENTRIES} tags`, `${entries}`, where);
  const body = new Uint8Array(bodyBytes(form, entries));
  await file.readInto(body, at + head.length, where);
  return parseEntries(body, entries, form);
}

async function bytesOf(file: ReadFile, entry: TiffEntry, page: number): Promise<Uint8Array> {
  if (entry.inline) return entry.inline;
  const length = valueBytes(entry);
  if (!(entry.offset + length <= file.size))
    throw unreadable(
      basename(file.path),
      `${length} bytes of a tag at ${entry.offset}`,
      `a file of ${file.size} bytes`,
      `page ${page}`,
    );
  const bytes = new Uint8Array(length);
  await file.readInto(bytes, entry.offset, `page ${page}`);
  return bytes;
}
