import {
  type AgreementPass,
  type CanonicalPass,
  canonicalPass,
  type ItemTable,
  itemsWithin,
  nodeNearness,
  strandNearness,
} from "#shared/agreement/items.ts";
import { threeTolerances } from "#shared/agreement/selection.ts";
import { compareIds } from "#shared/compare/canonical.ts";
import { TautlineError } from "#shared/errors.ts";
import { type ChordaeFile, frameOf } from "#shared/formats/chordae/chordae-file.ts";
import { type Measures, measureTrees } from "#shared/measure/measure-trees.ts";

/** A tree file with the name it goes by in messages. */
export interface StudyFile {
  readonly name: string;
  readonly file: ChordaeFile;
}

/** A pass with everything that is measured on it. */
export interface StudyPass extends AgreementPass {
  readonly name: string;
  readonly specimen: string;
  /** ISO 8601; null when the file does not say. */
  readonly created: string | null;
  readonly file: ChordaeFile;
  readonly canonical: CanonicalPass;
  readonly measures: Measures;
}

/** One specimen with all passes over it. */
export interface StudySpecimen {
  readonly name: string;
  /** By annotator, then pass. */
  readonly passes: readonly StudyPass[];
  /** For each of the study's annotators: index of the first pass over this specimen; -1 = none. */
  readonly firstPass: readonly number[];
  /** The tested method's trees, which take no part in the items; null when there are none. */
  readonly method: StudyPass | null;
}

/** Passes of several annotators over several specimens. */
export interface Study {
  readonly annotators: readonly string[];
  readonly specimens: readonly StudySpecimen[];
  readonly warnings: readonly string[];
}

/** Items of one specimen at one tolerance. */
export interface SpecimenItems {
  readonly strands: ItemTable;
  readonly nodes: ItemTable;
}

/**
 * Tree files sorted into a study. Files belong to one specimen when they name the same scan or carry the same voxel hash.
 * @param merge forks joined by shorter strands are one, millimetres.
 * @param method annotator whose trees are a method's, not a person's; null = none.
 * @throws TautlineError misuse when two files claim to be the same pass; other-scan when a specimen's files differ in frame.
 */
export function studyOf(files: readonly StudyFile[], merge: number, method: string | null): Study {
  const warnings: string[] = [];
  const specimenOf = specimenNames(files, warnings);
  const passes = files.map(({ name, file }): StudyPass => {
    if (file.annotator === undefined) warnings.push(`${name} names no annotator: its file name stands for one.`);
    return {
      name,
      specimen: specimenOf.get(name)!,
      annotator: file.annotator ?? name,
      pass: file.pass ?? 1,
      created: file.created ?? null,
      file,
      set: file,
      canonical: canonicalPass(file, merge),
      measures: measureTrees(file),
    };
  });
  passes.sort((a, b) => compareIds(a.specimen, b.specimen) || compareIds(a.annotator, b.annotator) || a.pass - b.pass);
  passes.forEach((pass, i) => {
    const before = passes[i - 1];
    if (before?.specimen === pass.specimen && before.annotator === pass.annotator && before.pass === pass.pass) {
      const what = `${before.name} and ${pass.name} both claim to be pass ${pass.pass} of ${pass.annotator} on ${pass.specimen}`;
      throw new TautlineError("misuse", `${what}. Leave one of them out, or give it its own pass number.`, { what });
    }
  });
  const annotators = [...new Set(passes.map((pass) => pass.annotator))].filter((one) => one !== method).sort(compareIds);
  const names = [...new Set(passes.map((pass) => pass.specimen))];
  const specimens = names.map((name): StudySpecimen => {
    const all = passes.filter((pass) => pass.specimen === name);
    refuseOtherFrames(all);
    const own = all.filter((pass) => pass.annotator !== method);
    const firstPass = annotators.map((annotator) => own.findIndex((pass) => pass.annotator === annotator));
    return { name, passes: own, firstPass, method: all.find((pass) => pass.annotator === method) ?? null };
  });
  return { annotators, specimens, warnings };
}

/** Items already sorted, by the specimen and what they were asked for: the agreement, its report and its table share them. */
const sorted = new WeakMap<StudySpecimen, Map<string, readonly SpecimenItems[]>>();

/** Items of a specimen at half, once and twice a tolerance of strands; nodes have twice as much. Millimetres. */
export function itemsAtThree(specimen: StudySpecimen, tolerance: number, merge: number): readonly SpecimenItems[] {
  const known = sorted.get(specimen) ?? new Map<string, readonly SpecimenItems[]>();
  sorted.set(specimen, known);
  const key = `${tolerance} ${merge}`;
  const found = known.get(key) ?? itemsAtTolerances(specimen, threeTolerances(tolerance), merge);
  known.set(key, found);
  return found;
}

/** Items of a specimen at a tolerance, as every part of an agreement sees them. Millimetres. */
export function itemsAt(specimen: StudySpecimen, tolerance: number, merge: number): SpecimenItems {
  return itemsAtThree(specimen, tolerance, merge)[1]!;
}

function itemsAtTolerances(specimen: StudySpecimen, tolerances: readonly number[], merge: number): SpecimenItems[] {
  const most = Math.max(...tolerances);
  const strands = strandNearness(specimen.passes, most, merge);
  const nodes = nodeNearness(specimen.passes, nodeTolerance(most), merge);
  return tolerances.map((one) => ({ strands: itemsWithin(strands, one), nodes: itemsWithin(nodes, nodeTolerance(one)) }));
}

/** Tolerance of nodes for one of strands: people place a node along its string less surely than the string across. */
export function nodeTolerance(tolerance: number): number {
  return 2 * tolerance;
}

function specimenNames(files: readonly StudyFile[], warnings: string[]): Map<string, string> {
  // A crop or bin counts as the whole scan that it was made from: places in millimetres agree.
  const wholeOf = new Map<string, string>();
  for (const { file } of files)
    if (file.volume?.sha256 && file.volume.derivedFrom?.sha256) wholeOf.set(file.volume.sha256, file.volume.derivedFrom.sha256);
  const scanHash = (volume: StudyFile["file"]["volume"]) => volume?.sha256 && (wholeOf.get(volume.sha256) ?? volume.sha256);
  const nameOfHash = new Map<string, string>();
  for (const { file } of [...files].sort((a, b) => compareIds(a.file.volume?.name ?? "", b.file.volume?.name ?? ""))) {
    const name = file.volume?.name;
    const sha256 = scanHash(file.volume);
    if (sha256 && !nameOfHash.has(sha256)) nameOfHash.set(sha256, name ?? `scan ${sha256.slice(0, 12)}`);
    else if (sha256 && name && nameOfHash.get(sha256)!.startsWith("scan ")) nameOfHash.set(sha256, name);
  }
  const hashesOf = new Map<string, Set<string>>();
  const silent: string[] = [];
  const out = new Map<string, string>();
  for (const { name, file } of files) {
    const scan = file.volume?.name;
    const sha256 = scanHash(file.volume);
    const specimen = (sha256 ? nameOfHash.get(sha256) : undefined) ?? scan ?? "unnamed specimen";
    out.set(name, specimen);
    if (!hashesOf.has(specimen)) hashesOf.set(specimen, new Set());
    if (sha256) hashesOf.get(specimen)!.add(sha256);
    else silent.push(name);
  }
  if (silent.length > 0)
    warnings.push(
      `Without the hash of their voxels, taken by the name of their scan alone: ${someNames(silent.sort(compareIds))}.`,
    );
  for (const [specimen, hashes] of hashesOf)
    if (hashes.size > 1)
      warnings.push(`Passes over ${specimen} were drawn on ${hashes.size} different scans (voxel hashes differ).`);
  return out;
}

const NAMES_SHOWN = 6;

function someNames(names: readonly string[]): string {
  const more = names.length - NAMES_SHOWN;
  return names.slice(0, NAMES_SHOWN).join(", ") + (more > 0 ? ` and ${more} more` : "");
}

function refuseOtherFrames(passes: readonly StudyPass[]): void {
  for (const pass of passes.slice(1)) {
    const [expected, found] = [frameOf(passes[0]!.file), frameOf(pass.file)];
    if (expected === found) continue;
    const sentence = `${pass.name}: expected places in the frame ${expected} like ${passes[0]!.name}, found ${found}. Trees in different frames cannot be compared.`;
    throw new TautlineError("other-scan", sentence, { file: pass.name, expected, found });
  }
}
