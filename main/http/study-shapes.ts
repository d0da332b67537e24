import { id } from "#main/http/engine-shapes.ts";
import {
  flag,
  list,
  matching,
  nullable,
  number,
  object,
  oneOf,
  optional,
  refuse,
  type Shape,
  text,
  whole,
} from "#main/http/shape.ts";
import { line, path, sha256 } from "#main/http/text-shapes.ts";
import type {
  ExportPassesRequest,
  PacketRequest,
  ProtocolRequest,
  ReturnRequest,
  ReviseRequest,
  SetAsideRequest,
  StudyDraft,
  StudyPatch,
  TakeInRequest,
} from "#shared/api/study.ts";
import { type DrawingLimits, PRIMARY_QUANTITIES, type ProtocolContent } from "#shared/study/protocol.ts";

/** Text of several lines. */
const words = (most: number) => text(most);
const reason = line(500);
const form = oneOf("folder", "zip");
/** Name of a picture of a protocol. */
export const pictureName = sha256;

const specimens = list(id, 1000);
const annotators = list(line(80), 100);
const passes = whole(1, 9);

export const studyDraft: Shape<StudyDraft> = object({
  name: line(200),
  specimens,
  training: specimens,
  annotators,
  passes,
});
export const studyPatch: Shape<StudyPatch> = object({
  name: optional(line(200)),
  specimens: optional(specimens),
  training: optional(specimens),
  annotators: optional(annotators),
  passes: optional(passes),
});

const mm = number(1e-6, 1e3);
const severities: Shape<DrawingLimits["severities"]> = (value, where) => {
  if (typeof value !== "object" || value === null || Array.isArray(value)) throw refuse(where, "an object", value);
  const entries = Object.entries(value);
  if (entries.length > 200) throw refuse(where, "at most 200 codes", `${entries.length}`);
  const code = matching(/^[a-z][a-z-]{0,60}$/, "a finding's code");
  const severity = oneOf("error", "warning", "note", "off");
  return Object.fromEntries(entries.map(([key, one]) => [code(key, `${where} key`), severity(one, `${where}.${key}`)]));
};

/** A protocol's content; also used for files, whose refusals are worded anew. */
export const protocolContent: Shape<ProtocolContent> = object({
  drawing: object({
    labels: list(
      object({
        label: line(80),
        on: oneOf("origin", "fork", "insertion", "end", "strand"),
        values: list(line(80), 100),
        required: flag,
      }),
      100,
    ),
    points: list(object({ point: line(80), text: words(4000), picture: nullable(pictureName) }), 100),
    limits: object({
      minimumDiameterMm: nullable(mm),
      minimumLengthMm: nullable(mm),
      mostBranches: nullable(whole(2, 100)),
      severities,
    }),
    remarks: words(20_000),
  }),
  analysis: object({
    primary: nullable(oneOf(...PRIMARY_QUANTITIES)),
    toleranceMm: mm,
    mergeMm: number(0, 1e3),
    positionScaleMm: mm,
    marginMm: nullable(mm),
  }),
  schedule: object({ washoutDays: whole(0, 3650) }),
});

export const protocolRequest: Shape<ProtocolRequest> = object({ content: protocolContent });
export const reviseRequest: Shape<ReviseRequest> = object({ reason });
export const setAsideRequest: Shape<SetAsideRequest> = object({ reason });
export const packetRequest: Shape<PacketRequest> = object({
  assignments: list(id, 10_000),
  folder: path,
  form,
  scan: oneOf("within", "apart", "without"),
  sign: flag,
  waiveWashout: optional(flag),
});
export const takeInRequest: Shape<TakeInRequest> = object({ path, allowOpenEnds: optional(flag) });
export const returnRequest: Shape<ReturnRequest> = object({ folder: path, form, sign: flag });
export const exportPassesRequest: Shape<ExportPassesRequest> = object({ folder: path });
