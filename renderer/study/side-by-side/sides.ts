import type { Client } from "#renderer/client/client.ts";
import type { LookedAtTrees } from "#renderer/desk/model/look-at-trees.ts";
import type { PassSummary, SpecimenRecord } from "#shared/api/specimen.ts";
import { TautlineError } from "#shared/errors.ts";
import { PassHistory } from "#shared/log/history.ts";
import type { TreeDocument } from "#shared/trees/document.ts";
import { plainFromDocument } from "#shared/trees/plain-from-document.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";

export type SideName = "a" | "b";

/** One side of a comparison: a pass, or a tree file of the same specimen. */
export interface Side {
  readonly label: string;
  readonly document: TreeDocument;
  readonly plain: PlainSet;
  /** What the person should know of it; null = nothing. */
  readonly caution: string | null;
}

export interface OpenSides {
  readonly specimen: SpecimenRecord;
  readonly passes: readonly PassSummary[];
  /** What the place calls the two sides. */
  readonly names: { readonly a: string; readonly b: string };
  readonly a: Side;
  readonly b: Side;
}

/** Places name a tree file by this, followed by its name. */
const FILE_MARK = "file~";

/** Files chosen in this page, by the text that names them in a place; a page loaded anew does not have them any more. */
const chosenFiles = new Map<string, LookedAtTrees>();

/** Keeps a looked-at file for a place. @returns the text that names it there */
export function nameOfChosenFile(file: LookedAtTrees): string {
  const name = `${FILE_MARK}${file.name}`;
  chosenFiles.set(name, file);
  return name;
}

/** "AN-1, pass 2", with the name of a kept branch. */
export function passLabel(pass: PassSummary): string {
  return `${pass.annotator}, pass ${pass.number}${pass.name === undefined ? "" : ` (${pass.name})`}`;
}

/** Reads both sides. @throws not-found, unreadable-input */
export async function openSides(client: Client, specimenId: string, a: string, b: string): Promise<OpenSides> {
  const shelf = await client.shelf();
  const entry = shelf.specimens.find((one) => one.specimen.id === specimenId);
  if (entry === undefined) {
    const sentence = "This specimen is not in the library any more. Go back to the shelf and choose another.";
    throw new TautlineError("not-found", sentence, { what: "specimen", id: specimenId });
  }
  const [sideA, sideB] = await Promise.all([openSide(client, entry, a), openSide(client, entry, b)]);
  return { specimen: entry.specimen, passes: entry.passes, names: { a, b }, a: sideA, b: sideB };
}

interface Entry {
  readonly specimen: SpecimenRecord;
  readonly passes: readonly PassSummary[];
}

async function openSide(client: Client, { specimen, passes }: Entry, id: string): Promise<Side> {
  if (id.startsWith(FILE_MARK)) {
    const file = chosenFiles.get(id);
    const name = id.slice(FILE_MARK.length);
    if (file === undefined) {
      const sentence = `The page was loaded anew and does not have the tree file ${name} any more. Choose it again.`;
      throw new TautlineError("not-found", sentence, { what: "tree file", id: name });
    }
    return sideOf(name, file.document, file.scan === "same" ? null : file.sentence);
  }
  const pass = passes.find((one) => one.id === id);
  if (pass === undefined) {
    const sentence = `A pass of ${specimen.name} is not in the library any more. Choose another.`;
    throw new TautlineError("not-found", sentence, { what: "pass", id });
  }
  const { lines } = await client.readLog(specimen.id, pass.id);
  return sideOf(passLabel(pass), PassHistory.fromLines(lines, `the log of ${passLabel(pass)}`).document, null);
}

function sideOf(label: string, document: TreeDocument, caution: string | null): Side {
  return { label, document, plain: plainFromDocument(document), caution };
}
