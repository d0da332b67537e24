import type { CurveBody, LogHeader } from "#shared/log/records.ts";
import { LOG_FORMAT, LOG_VERSION } from "#shared/log/records.ts";
import {
  type Check,
  holds,
  isBoolean,
  isCount,
  isFinite3,
  isFiniteNumber,
  isPlainObject,
  isText,
  listOf,
  numberList,
  type OptionalCheck,
  objectOf,
  oneOf,
  optional,
  orNull,
  ShapeFault,
} from "#shared/log/shape-checks.ts";
import type { CrossLink, Curve, Dismissal, Landmarks, Strand, Tree, TreeNode } from "#shared/trees/document.ts";
import { NODE_KINDS } from "#shared/trees/document.ts";
import { type IdTable, isIdOf } from "#shared/trees/ids.ts";
import { OPERATION_CODES } from "#shared/trees/operations.ts";

/** A check for every key of T, so that a key added to the type must be added here. */
type Fields<T> = { readonly [K in keyof T]-?: Check | OptionalCheck };

const id = (table: IdTable): Check => holds(`a ${table} id`, (v) => isIdOf(table, v));
const certainty = optional(oneOf(["sure", "doubtful"]));
const more = optional(isPlainObject);
const muscle = oneOf(["antero-lateral", "postero-medial"]);

const treeFields: Fields<Tree> = { id: id("tree"), name: isText, root: orNull(id("node")), more };

const nodeFields: Fields<TreeNode> = {
  id: id("node"),
  tree: id("tree"),
  kind: oneOf(NODE_KINDS),
  position: isFinite3,
  certainty,
  site: optional(oneOf(["head", "wall", "unseen", "scan-edge"])),
  muscle: optional(muscle),
  head: optional(isCount),
  leaflet: optional(oneOf(["anterior", "posterior", "commissure"])),
  segment: optional(oneOf(["A1", "A2", "A3", "P1", "P2", "P3", "AC", "PC"])),
  zone: optional(oneOf(["free-edge", "rough", "base"])),
  cleft: optional(isBoolean),
  more,
};

const strandFields: Fields<Strand> = {
  id: id("strand"),
  tree: id("tree"),
  from: id("node"),
  to: id("node"),
  curve: orNull(id("curve")),
  via: listOf(isFinite3),
  legs: optional(listOf(oneOf(["guide", "straight"]))),
  strut: optional(isBoolean),
  certainty,
  more,
};

const crossLinkFields: Fields<CrossLink> = {
  id: id("cross-link"),
  from: id("node"),
  to: id("node"),
  curve: orNull(id("curve")),
  via: listOf(isFinite3),
  certainty,
  more,
};

const landmarkFields: Fields<Landmarks> = {
  annulus: optional(objectOf({ closed: isBoolean, points: listOf(isFinite3) })),
  freeEdges: optional(listOf(listOf(isFinite3))),
  commissures: optional(listOf(isFinite3)),
  muscleHeads: optional(listOf(objectOf({ muscle, head: isCount, position: isFinite3 }))),
  more,
};

const dismissalFields: Fields<Dismissal> = { key: isText, reason: isText };

const isTree = objectOf(treeFields);
const isNode = objectOf(nodeFields);
const isStrand = objectOf(strandFields);
const isCrossLink = objectOf(crossLinkFields);
const isLandmarks = objectOf(landmarkFields);
const isDismissal = objectOf(dismissalFields);

const TABLES: Readonly<Record<string, { readonly id: Check; readonly record: Check; readonly key: string }>> = {
  tree: { id: id("tree"), record: isTree, key: "id" },
  node: { id: id("node"), record: isNode, key: "id" },
  strand: { id: id("strand"), record: isStrand, key: "id" },
  "cross-link": { id: id("cross-link"), record: isCrossLink, key: "id" },
  dismissal: { id: isText, record: isDismissal, key: "key" },
};
const TABLE_WORDS = [...Object.keys(TABLES), "landmarks"];

const isChange: Check = (value, where) => {
  isPlainObject(value, where);
  const change = value as { table?: unknown; id?: unknown; from?: unknown; to?: unknown };
  oneOf(TABLE_WORDS)(change.table, `${where}.table`);
  if (change.table === "landmarks") {
    objectOf({ table: isText, from: isLandmarks, to: isLandmarks })(value, where);
    return;
  }
  const table = TABLES[change.table as string]!;
  objectOf({ table: isText, id: table.id, from: orNull(table.record), to: orNull(table.record) })(value, where);
  for (const side of ["from", "to"] as const) {
    const record = change[side] as Record<string, unknown> | null;
    if (record !== null && record[table.key] !== change.id) {
      throw new ShapeFault(`${where}.${side}.${table.key}`, `the id of the change, ${String(change.id)}`, record[table.key]);
    }
  }
};

const headerFields: Fields<LogHeader> = {
  format: holds(`"${LOG_FORMAT}"`, (v) => v === LOG_FORMAT),
  version: holds(`${LOG_VERSION} (a newer log needs a newer Tautline)`, (v) => v === LOG_VERSION),
  pass: isText,
  specimen: isText,
  annotator: isText,
  number: isCount,
  epoch: isText,
};

const curveFields: Fields<CurveBody> = {
  id: id("curve"),
  points: numberList(false),
  radii: numberList(true),
  madeBy: listOf(
    holds(
      "[first index, last index, guide, follow, straight or edited]",
      (v) =>
        Array.isArray(v) &&
        v.length === 3 &&
        Number.isSafeInteger(v[0]) &&
        Number.isSafeInteger(v[1]) &&
        ["guide", "follow", "straight", "edited"].includes(v[2]),
    ),
  ),
  imageFit: orNull(isFiniteNumber),
} satisfies Fields<Pick<Curve, "id" | "madeBy" | "imageFit">> & Record<"points" | "radii", Check>;

const isCurveShape = objectOf(curveFields);
const isCurve: Check = (value, where) => {
  isCurveShape(value, where);
  const curve = value as CurveBody;
  const n = curve.radii.length;
  if (n < 2) throw new ShapeFault(`${where}.radii`, "two points or more", n);
  if (curve.points.length !== 3 * n)
    throw new ShapeFault(`${where}.points`, `${3 * n} numbers for ${n} radii`, curve.points.length);
  curve.madeBy.forEach(([first, last], i) => {
    if (first < 0 || last >= n || first > last)
      throw new ShapeFault(`${where}.madeBy[${i}]`, `indices in 0..${n - 1}`, [first, last]);
  });
};

/** Check of a record's body, by its kind. */
export const BODY_CHECKS: Readonly<Record<string, Check>> = {
  header: objectOf(headerFields),
  op: objectOf({ code: oneOf(OPERATION_CODES), changes: listOf(isChange) }),
  at: objectOf({ at: isCount, how: oneOf(["undo", "redo", "jump"]) }),
  mark: objectOf({ name: isText }),
  curve: isCurve,
  session: objectOf({ state: oneOf(["opened", "closed", "idle"]) }),
};

/** Check of everything around the body. */
export const ENVELOPE_CHECK: Check = objectOf({
  seq: isCount,
  parent: isCount,
  prev: holds("a SHA-256 in hex, or nothing on line 0", (v) => typeof v === "string" && /^([0-9a-f]{64})?$/.test(v)),
  t: isFiniteNumber,
  mono: isFiniteNumber,
  session: isText,
  kind: oneOf(Object.keys(BODY_CHECKS)),
  label: isText,
  body: isPlainObject,
});

const counters = objectOf({ tree: isCount, node: isCount, strand: isCount, "cross-link": isCount, curve: isCount });

/** Check of a snapshot, except header, curves and operations, which {@link BODY_CHECKS} knows. */
export const SNAPSHOT_CHECK: Check = objectOf({
  format: holds("a pass snapshot", (v) => v === "tautline-pass-snapshot"),
  version: holds("version 1", (v) => v === 1),
  seq: isCount,
  hash: holds("a SHA-256 in hex", (v) => typeof v === "string" && /^[0-9a-f]{64}$/.test(v)),
  header: isPlainObject,
  trees: listOf(isTree),
  nodes: listOf(isNode),
  strands: listOf(isStrand),
  crossLinks: listOf(isCrossLink),
  landmarks: isLandmarks,
  dismissals: listOf(isDismissal),
  curves: listOf(isPlainObject),
  pointer: isCount,
  operations: listOf(
    objectOf({ seq: isCount, parent: isCount, t: isFiniteNumber, session: isText, label: isText, operation: isPlainObject }),
  ),
  onward: listOf(holds("two seqs", (v) => Array.isArray(v) && v.length === 2 && v.every(Number.isSafeInteger))),
  marks: listOf(objectOf({ seq: isCount, name: isText, at: isCount, t: isFiniteNumber })),
  counters,
  effort: objectOf({
    workMs: isFiniteNumber,
    sessions: isCount,
    last: orNull(objectOf({ session: isText, mono: isFiniteNumber, away: isBoolean })),
  }),
  changed: isFiniteNumber,
});
