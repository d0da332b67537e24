import { unreadable } from "#shared/errors.ts";

/** Slices in the order of their numbers. */
export interface OrderedNames {
  readonly names: readonly string[];
  /** Sentences a person should know. */
  readonly notes: readonly string[];
}

interface Parted {
  readonly name: string;
  /** Texts between numbers in lower case, and the numbers, in turn; the first is a text. */
  readonly texts: readonly string[];
  readonly numbers: readonly number[];
}

/**
 * File names in natural order (2 before 10) by the one number in which they differ.
 * @throws unreadable-input, naming the file or the number, for a name of another pattern, a number given twice, and a gap in the numbering.
 */
export function orderSliceNames(names: readonly string[], folder: string): OrderedNames {
  const parted = names.map((name) => part(name, folder));
  const pattern = commonPattern(parted);
  const odd = parted.find((p) => patternOf(p) !== pattern);
  const alike = parted.filter((p) => patternOf(p) === pattern);
  if (alike[0]!.numbers.length === 0) throw unreadable(folder, "names with a number for the slice", alike[0]!.name);
  if (odd)
    throw unreadable(
      folder,
      `names that differ in one number, such as ${alike[0]!.name}`,
      `${odd.name}`,
      undefined,
      "Move what is no slice to another folder.",
    );
  const varying = alike[0]!.numbers.map((_, k) => k).filter((k) => alike.some((p) => p.numbers[k] !== alike[0]!.numbers[k]));
  if (varying.length > 1) {
    const other = alike.find((p) => varying.every((k) => p.numbers[k] !== alike[0]!.numbers[k])) ?? alike[1]!;
    throw unreadable(
      folder,
      "names that differ in one number",
      `${alike[0]!.name} and ${other.name}`,
      undefined,
      "Keep one scan in the folder.",
    );
  }
  const key = varying[0] ?? alike[0]!.numbers.length - 1;
  const sorted = [...alike].sort((a, b) => a.numbers[key]! - b.numbers[key]!);
  const steps = sorted.slice(1).map((p, k) => p.numbers[key]! - sorted[k]!.numbers[key]!);
  const twice = steps.indexOf(0);
  if (twice >= 0)
    throw unreadable(folder, "a number of its own for each slice", `${sorted[twice]!.name} and ${sorted[twice + 1]!.name}`);
  const step = steps.reduce((least, s) => Math.min(least, s), Number.POSITIVE_INFINITY);
  const gap = steps.findIndex((s) => s !== step);
  if (gap >= 0) {
    const lost = sorted[gap]!.numbers[key]! + step;
    const between = `between ${sorted[gap]!.name} and ${sorted[gap + 1]!.name}`;
    throw unreadable(
      folder,
      "slices numbered without gaps",
      `no number ${lost} ${between}`,
      undefined,
      "Find the missing file, or number the slices anew if none is missing.",
    );
  }
  const notes = step > 1 ? [`The slices are numbered in steps of ${step}; they are taken as neighbours.`] : [];
  return { names: sorted.map((p) => p.name), notes };
}

function part(name: string, folder: string): Parted {
  const pieces = name.toLowerCase().split(/(\d+)/);
  const texts = pieces.filter((_, k) => k % 2 === 0);
  const numbers = pieces.filter((_, k) => k % 2 === 1).map(Number);
  if (!numbers.every(Number.isSafeInteger)) throw unreadable(folder, "numbers of at most 15 digits in names", name);
  return { name, texts, numbers };
}

function patternOf(p: Parted): string {
  return p.texts.join("\0");
}

/** The pattern that most names have. */
function commonPattern(parted: readonly Parted[]): string {
  const counts = new Map<string, number>();
  for (const p of parted) counts.set(patternOf(p), (counts.get(patternOf(p)) ?? 0) + 1);
  return [...counts].reduce((best, entry) => (entry[1] > best[1] ? entry : best))[0];
}
