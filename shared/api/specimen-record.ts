import type { SpecimenFacts, SpecimenRecord } from "#shared/api/specimen.ts";
import { unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";

type Json = Record<string, unknown>;
const SHA256 = /^[0-9a-f]{64}$/;

/**
 * The specimen record a `specimen.json` holds, every field checked. Keys this version does not know are kept.
 * @param value the parsed JSON.
 * @throws unreadable-input for another format, a newer version, or a field that is missing or of the wrong kind.
 */
export function parseSpecimenRecord(value: unknown, file: string): SpecimenRecord {
  const check = (good: boolean, where: string, expected: string, found: unknown) => {
    if (!good) throw unreadable(file, expected, shown(found), where);
  };
  check(isObject(value), "whole file", "a JSON object", value);
  const record = value as Json;
  check(record.format === "tautline-specimen", "format", "'tautline-specimen'", record.format);
  if (typeof record.version === "number" && record.version > 1)
    throw unreadable(
      file,
      "version 1",
      `version ${record.version}`,
      "version",
      "It was written by a newer version of the program; use that one.",
    );
  check(record.version === 1, "version", "1", record.version);
  for (const key of ["id", "name"]) check(isText(record[key]), key, "a text", record[key]);
  check(isCount(record.created), "created", "UTC milliseconds", record.created);
  check(typeof record.synthetic === "boolean", "synthetic", "true or false", record.synthetic);
  const source = record.source as Json;
  check(isObject(source), "source", "an object", record.source);
  for (const key of ["name", "family"]) check(isText(source[key]), `source.${key}`, "a text", source[key]);
  check(isCount(source.bytes), "source.bytes", "a number of bytes", source.bytes);
  check(Object.hasOwn(BYTES_OF_DTYPE, String(source.dtype)), "source.dtype", "a voxel type", source.dtype);
  checkVolume(record.volume, check);
  check(isArrayOf(record.conversions, isText), "conversions", "a list of texts", record.conversions);
  check(isOneOf(record.polarity, ["bright", "dark"]), "polarity", "bright or dark", record.polarity);
  const display = record.display as Json;
  check(isObject(display) && isNumber(display.low) && isNumber(display.high), "display", "low and high", record.display);
  checkFacts(record.facts, check);
  checkLandmarks(record.landmarks, check);
  return value as SpecimenRecord;
}

type Check = (good: boolean, where: string, expected: string, found: unknown) => void;

function checkVolume(value: unknown, check: Check): void {
  check(isObject(value), "volume", "an object", value);
  const volume = value as Json;
  check(typeof volume.sha256 === "string" && SHA256.test(volume.sha256), "volume.sha256", "64 hex digits", volume.sha256);
  const types = ["uint8", "uint16", "int16", "float32"];
  check(isOneOf(volume.dtype, types), "volume.dtype", types.join(", "), volume.dtype);
  check(
    isArrayOf(volume.size, (n) => isCount(n) && n > 0, 3),
    "volume.size",
    "three whole numbers",
    volume.size,
  );
  check(
    isArrayOf(volume.spacing, (n) => isNumber(n) && n > 0, 3),
    "volume.spacing",
    "three positive numbers",
    volume.spacing,
  );
  check(isArrayOf(volume.origin, isNumber, 3), "volume.origin", "three numbers", volume.origin);
  check(isArrayOf(volume.direction, isNumber, 9), "volume.direction", "nine numbers", volume.direction);
  check(isOneOf(volume.frame, ["LPS", "scan"]), "volume.frame", "LPS or scan", volume.frame);
  check(isOneOf(volume.handedness, ["confirmed", "unknown"]), "volume.handedness", "confirmed or unknown", volume.handedness);
  const blur = volume.blurFwhmMm;
  check(blur === null || (isNumber(blur) && blur > 0), "volume.blurFwhmMm", "a positive number or null", blur);
  const range = volume.range as Json;
  check(isObject(range) && isNumber(range.min) && isNumber(range.max), "volume.range", "min and max", volume.range);
  const from = volume.derivedFrom;
  check(from === undefined || isDerivation(from), "volume.derivedFrom", "a hash, and crop and bin where they are given", from);
  const { packing, inPlace } = volume;
  check(packing === undefined || packing === "gzip", "volume.packing", "gzip or nothing", packing);
  check(inPlace === undefined || isInPlace(inPlace), "volume.inPlace", "a path, an array and what it was like", inPlace);
}

function isInPlace(value: unknown): boolean {
  if (!isObject(value) || !isText(value.path) || typeof value.array !== "string") return false;
  if (value.array.includes("\\") || value.array.split("/").includes("..")) return false;
  if (!isOneOf(value.metadata, ["zarr.json", ".zarray"])) return false;
  const axes = value.selection;
  if (!isArrayOf(axes, (index) => index === null || isCount(index))) return false;
  return (
    (axes as unknown[]).filter((index) => index === null).length === 3 &&
    ["files", "bytes", "changed"].every((key) => isCount(value[key]))
  );
}

function isDerivation(value: unknown): boolean {
  if (!isObject(value) || typeof value.sha256 !== "string" || !SHA256.test(value.sha256)) return false;
  const { crop, bin } = value;
  const goodBin = bin === undefined || (isCount(bin) && (bin as number) > 0);
  return goodBin && (crop === undefined || isArrayOf(crop, isCount, 6));
}

/** Checks facts a person gave about a specimen; also used for requests. */
export function isSpecimenFacts(value: unknown): value is SpecimenFacts {
  let good = true;
  checkFacts(value, (fine) => {
    if (!fine) good = false;
  });
  return good;
}

function checkFacts(value: unknown, check: Check): void {
  check(isObject(value), "facts", "an object", value);
  if (!isObject(value)) return;
  for (const key of ["species", "fixation", "medium", "state"])
    check(value[key] === undefined || typeof value[key] === "string", `facts.${key}`, "a text", value[key]);
  check(value.pressure === undefined || isNumber(value.pressure), "facts.pressure", "a number (mmHg)", value.pressure);
}

function checkLandmarks(value: unknown, check: Check): void {
  check(isObject(value), "landmarks", "an object", value);
  const { annulus, freeEdges, commissures, muscleHeads } = value as Json;
  const isPoint = (p: unknown) => isArrayOf(p, isNumber, 3);
  const isPoints = (list: unknown) => isArrayOf(list, isPoint);
  const goodAnnulus = isObject(annulus) && typeof annulus.closed === "boolean" && isPoints(annulus.points);
  check(annulus === undefined || goodAnnulus, "landmarks.annulus", "closed and points", annulus);
  check(freeEdges === undefined || isArrayOf(freeEdges, isPoints), "landmarks.freeEdges", "lists of points", freeEdges);
  check(commissures === undefined || isPoints(commissures), "landmarks.commissures", "a list of points", commissures);
  const isHead = (head: unknown) =>
    isObject(head) && isOneOf(head.muscle, ["antero-lateral", "postero-medial"]) && isCount(head.head) && isPoint(head.position);
  check(
    muscleHeads === undefined || isArrayOf(muscleHeads, isHead),
    "landmarks.muscleHeads",
    "muscle, head, position",
    muscleHeads,
  );
}

function isObject(value: unknown): value is Json {
  return typeof value === "object" && value !== null && !Array.isArray(value);
}
function isText(value: unknown): value is string {
  return typeof value === "string" && value !== "";
}
function isNumber(value: unknown): value is number {
  return typeof value === "number" && Number.isFinite(value);
}
function isCount(value: unknown): value is number {
  return Number.isSafeInteger(value) && (value as number) >= 0;
}
function isOneOf(value: unknown, words: readonly string[]): boolean {
  return typeof value === "string" && words.includes(value);
}
function isArrayOf(value: unknown, good: (item: unknown) => boolean, length?: number): boolean {
  return Array.isArray(value) && (length === undefined || value.length === length) && value.every(good);
}

function shown(value: unknown): string {
  if (value === undefined) return "nothing";
  const text = JSON.stringify(value);
  return text.length > 60 ? `${text.slice(0, 60)}...` : text;
}
