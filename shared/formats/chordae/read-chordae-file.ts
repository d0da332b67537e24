import { unreadable } from "#shared/errors.ts";
import { checkChordaeFile } from "#shared/formats/chordae/check-chordae-file.ts";
import type { ChordaeFile, FileLine } from "#shared/formats/chordae/chordae-file.ts";

/** Deeper nesting is refused: no tree file needs it, and what walks the value later must not run out of stack. */
const DEEPEST_NESTING = 64;

/**
 * The tree file that a text holds. An empty `points` is read as absent (not traced). Keys this version does not know are kept.
 * @param fileName for messages.
 * @throws unreadable-input for text that is not JSON, another format, a newer version, another unit, a broken schema, ids used
 *   twice or naming nothing, radii or ends that do not fit their points.
 */
export function parseChordaeFile(text: string, fileName: string): ChordaeFile {
  const json = text.startsWith("\uFEFF") ? text.slice(1) : text;
  if (json.trim() === "") throw unreadable(fileName, "a tree file in JSON", "an empty file");
  if (nestsTooDeep(json)) throw unreadable(fileName, `nesting up to ${DEEPEST_NESTING} levels`, "deeper nesting");
  let value: unknown;
  try {
    value = JSON.parse(json);
  } catch (error) {
    throw unreadable(fileName, "a tree file in JSON", `text that is not JSON: ${(error as Error).message}`);
  }
  const file = checkChordaeFile(value, fileName);
  return {
    ...file,
    trees: file.trees.map((tree) => ({ ...tree, strands: tree.strands.map(withoutEmptyPoints) })),
    ...(file.crossLinks && { crossLinks: file.crossLinks.map(withoutEmptyPoints) }),
  };
}

/** {@link parseChordaeFile} for bytes. @throws unreadable-input also for bytes that are not UTF-8. */
export function parseChordaeBytes(bytes: Uint8Array, fileName: string): ChordaeFile {
  let text: string;
  try {
    text = new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    throw unreadable(fileName, "a tree file in UTF-8", "bytes that are not UTF-8");
  }
  return parseChordaeFile(text, fileName);
}

function withoutEmptyPoints<T extends FileLine>(line: T): T {
  if (line.points === undefined || line.points.length > 0) return line;
  const { points: _points, radii: _radii, ...rest } = line;
  return rest as unknown as T;
}

function nestsTooDeep(json: string): boolean {
  let depth = 0;
  let inText = false;
  for (let i = 0; i < json.length; i++) {
    const c = json.charCodeAt(i);
    if (inText) {
      if (c === 0x5c) i += 1;
      else if (c === 0x22) inText = false;
    } else if (c === 0x22) inText = true;
    else if (c === 0x5b || c === 0x7b) {
      depth += 1;
      if (depth > DEEPEST_NESTING) return true;
    } else if (c === 0x5d || c === 0x7d) depth -= 1;
  }
  return false;
}
