import type { PassSummary, SpecimenFacts, SpecimenVolume } from "#shared/api/specimen.ts";

/** Between thousands, as in "1 040": narrow and never broken. */
const NARROW = "\u202f";
const FIXED = "\u00a0";

/** A whole number with its thousands set apart. */
export function countWords(value: number): string {
  return String(Math.round(value)).replace(/\B(?=(\d{3})+$)/g, NARROW);
}

/** "1 tree", "14 trees". */
export function plural(count: number, one: string, many = `${one}s`): string {
  return `${countWords(count)}${FIXED}${count === 1 ? one : many}`;
}

/** What is on the shelf: "3 specimens, 1 study, 2 assignments"; what there is none of is left out, but not all of it. */
export function countsWords(specimens: number, studies: number, assignments: number): string {
  const words = [
    specimens > 0 || studies + assignments === 0 ? plural(specimens, "specimen") : "",
    studies > 0 ? plural(studies, "study", "studies") : "",
    assignments > 0 ? plural(assignments, "assignment") : "",
  ];
  return words.filter((word) => word !== "").join(", ");
}

/** "1 040 × 1 040 × 1 310 voxels". */
export function voxelsWords(size: readonly number[]): string {
  return `${size.map(countWords).join(" × ")} voxels`;
}

/** Voxel size in micrometres: one number for cubes, three otherwise. */
export function spacingWords(spacing: readonly [number, number, number]): string {
  const [x, y, z] = spacing.map((mm) => String(Number((mm * 1000).toPrecision(5))));
  const numbers = x === y && y === z ? x : `${x} × ${y} × ${z}`;
  return `${numbers}${FIXED}µm`;
}

/** "41.6 × 41.6 × 52.4 mm": the sides of the whole scan. */
export function sidesWords(size: readonly number[], spacing: readonly number[]): string {
  const sides = size.map((count, axis) => lengthDigits(count * spacing[axis]!));
  return `${sides.join(" × ")}${FIXED}mm`;
}

function lengthDigits(mm: number): string {
  return mm >= 1000 ? countWords(mm) : mm >= 1 ? mm.toFixed(1) : String(Number(mm.toPrecision(2)));
}

export function bytesWords(bytes: number): string {
  const units = ["bytes", "KB", "MB", "GB", "TB"];
  let value = bytes;
  let unit = 0;
  while (value >= 1000 && unit < units.length - 1) {
    value /= 1000;
    unit += 1;
  }
  return `${unit === 0 ? countWords(value) : value.toFixed(value < 10 ? 1 : 0)}${FIXED}${units[unit]}`;
}

/** "2 h 10 min", "4 min", "less than a minute". */
export function workWords(ms: number): string {
  const minutes = Math.round(ms / 60_000);
  if (minutes < 1) return ms > 0 ? "less than a minute" : "no time yet";
  const hours = Math.floor(minutes / 60);
  const rest = minutes % 60;
  if (hours === 0) return `${minutes}${FIXED}min`;
  return rest === 0 ? `${hours}${FIXED}h` : `${hours}${FIXED}h ${rest}${FIXED}min`;
}

/** How long a job will still take; null = not known yet. */
export function timeLeftWords(seconds: number | null): string | null {
  if (seconds === null || !Number.isFinite(seconds)) return null;
  if (seconds < 5) return "a few seconds left";
  if (seconds < 90) return `${Math.round(seconds / 5) * 5}${FIXED}s left`;
  return `${workWords(seconds * 1000)} left`;
}

/** A pass in one line: "14 trees, 3 open, 2 doubts, 2 h 10 min". */
export function passWords(pass: PassSummary): string {
  const words = [plural(pass.trees, "tree")];
  if (pass.openEnds > 0) words.push(plural(pass.openEnds, "open end"));
  if (pass.doubts > 0) words.push(plural(pass.doubts, "doubt"));
  words.push(pass.edits === 0 ? "no edits yet" : plural(pass.edits, "edit"));
  if (pass.workMs > 0) words.push(workWords(pass.workMs));
  return words.join(", ");
}

/** "porcine, fixed in formalin, in air, 100 mmHg, closed"; empty when nothing is known. */
export function factsWords(facts: SpecimenFacts): string {
  const { species, fixation, medium, pressure, state } = facts;
  const said = [species, fixation, medium, pressure === undefined ? undefined : `${pressure}${FIXED}mmHg`, state];
  return said.filter((fact) => fact !== undefined && fact !== "").join(" · ");
}

/** Day and minute on this computer's clock: "2026-12-01 13:05". */
/** What of the scan was kept and how, where it is not a plain copy of the whole: "a box of the scan, halved · packed". */
export function keptWords({
  derivedFrom,
  packing,
  inPlace,
}: Pick<SpecimenVolume, "derivedFrom" | "packing" | "inPlace">): string {
  const bin = derivedFrom?.bin ?? 1;
  const part = derivedFrom ? (bin > 1 ? `part of a scan, ${bin} times as coarse` : "part of a scan") : null;
  return [part, packing ? "packed" : null, inPlace ? "used where it lies" : null].filter((word) => word !== null).join(" · ");
}

export function dateWords(utcMs: number): string {
  const d = new Date(utcMs);
  const two = (n: number) => String(n).padStart(2, "0");
  return `${d.getFullYear()}-${two(d.getMonth() + 1)}-${two(d.getDate())} ${two(d.getHours())}:${two(d.getMinutes())}`;
}
