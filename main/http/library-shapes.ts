import { id, point, polarity, windowName } from "#main/http/engine-shapes.ts";
import {
  flag,
  list,
  nullable,
  number,
  object,
  oneOf,
  optional,
  refuse,
  type Shape,
  text,
  triple,
  whole,
} from "#main/http/shape.ts";
import { sha256 as hash, line, path } from "#main/http/text-shapes.ts";
import type { ProjectionsRequest } from "#shared/api/projections.ts";
import type { AppendRequest, ExportRequest, IntakeRequest, LookRequest, SpecimenPatch } from "#shared/api/routes.ts";
import type { SpecimenFacts } from "#shared/api/specimen.ts";
import type { LogHead } from "#shared/log/records.ts";
import type { Landmarks, UnknownKeys } from "#shared/trees/document.ts";
import type { Bin, Crop, Region } from "#shared/volume/region/region.ts";

const words = text(500);

export const annotatorRequest = object({ annotator: line(80) });
export const windowRequest = object({ window: windowName });
export const stateRequest = object({ state: oneOf("under-way", "finished") });
export const forceRequest = object({ force: optional(flag) });
export const folderRequest = object({ path: optional(path) });
/** Which of several, from 0. */
const reading = { channel: optional(whole(0, 2 ** 31)), time: optional(whole(0, 2 ** 31)) };
export const lookRequest: Shape<LookRequest> = object({ path, ...reading });
export const projectionsRequest: Shape<ProjectionsRequest> = object({ path, ...reading, polarity });
export const emptyRequest = object({});

const head: Shape<LogHead> = object({ seq: whole(0, Number.MAX_SAFE_INTEGER), hash });
/** One record of a log; a newline inside it would make two lines of one. */
const logLine: Shape<string> = (value, where) => {
  const given = text(64 * 1024 * 1024, 2)(value, where);
  return given.includes("\n") ? text(0)(given, `${where} (no newline)`) : given;
};
const lines = list(logLine, 5_000_000);

export const appendRequest: Shape<AppendRequest> = object({
  window: windowName,
  epoch: text(80, 1),
  base: head,
  lines,
});
export const branchRequest = object({ lines, name: line(200) });
export const rebuildRequest = object({ lines });

const facts: Shape<SpecimenFacts> = object({
  species: optional(words),
  fixation: optional(words),
  medium: optional(words),
  pressure: optional(number(-1000, 10_000)),
  state: optional(words),
});

const unknownKeys: Shape<UnknownKeys> = (value, where) => {
  if (typeof value !== "object" || value === null || Array.isArray(value)) return object({})(value, where);
  return value as UnknownKeys;
};

const places = list(point, 100_000);
const landmarks: Shape<Landmarks> = object({
  annulus: optional(object({ closed: flag, points: places })),
  freeEdges: optional(list(places, 1000)),
  commissures: optional(places),
  muscleHeads: optional(
    list(object({ muscle: oneOf("antero-lateral", "postero-medial"), head: whole(0, 1000), position: point }), 1000),
  ),
  more: optional(unknownKeys),
});

const handedness = oneOf("confirmed", "unknown");
const display = object({ low: number(-1e12, 1e12), high: number(-1e12, 1e12) });

export const specimenPatch: Shape<SpecimenPatch> = object({
  name: optional(line(200)),
  facts: optional(facts),
  landmarks: optional(landmarks),
  polarity: optional(polarity),
  display: optional(display),
  blurFwhmMm: optional(nullable(number(1e-6, 1e3))),
  handedness: optional(handedness),
});

const edges = list(whole(0, 2 ** 31), 6);
const crop: Shape<Crop> = (value, where) => {
  const [x0, y0, z0, x1, y1, z1] = edges(value, where);
  if (z1 === undefined) throw refuse(where, "six whole numbers", value);
  return [x0!, y0!, z0!, x1!, y1!, z1];
};
const bin: Shape<Bin> = (value, where) => (whole(1, 2)(value, where) === 2 ? 2 : 1);
const region: Shape<Region> = object({ crop, bin });

export const intakeRequest: Shape<IntakeRequest> = object({
  path,
  ...reading,
  name: line(200),
  spacing: triple(number(1e-6, 1e3)),
  handedness,
  mirror: optional(flag),
  region: optional(region),
  keep: optional(oneOf("plain", "packed", "in-place")),
  polarity,
  facts,
});

export const exportRequest: Shape<ExportRequest> = object({
  specimen: id,
  pass: id,
  format: oneOf("chordae", "graphml", "vtp", "tables", "labels"),
  path: optional(path),
});
