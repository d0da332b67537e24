import { isTautlineError } from "#shared/errors.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { apply, withCurves } from "#shared/trees/apply.ts";
import { END_KINDS, emptyDocument, type NodeId, type Strand, type TreeDocument } from "#shared/trees/document.ts";
import { addCrossLink, deleteCrossLink } from "#shared/trees/edits/add-cross-link.ts";
import type { Anchor } from "#shared/trees/edits/anchor.ts";
import { cutStrand } from "#shared/trees/edits/cut-strand.ts";
import { deleteStrand, deleteTree } from "#shared/trees/edits/delete-strand.ts";
import { dismissFinding } from "#shared/trees/edits/dismiss-finding.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { endStrand } from "#shared/trees/edits/end-strand.ts";
import { exchangeTails } from "#shared/trees/edits/exchange-tails.ts";
import { extendStrand } from "#shared/trees/edits/extend-strand.ts";
import { dissolve, joinStrands } from "#shared/trees/edits/join-strands.ts";
import { moveBranch } from "#shared/trees/edits/move-branch.ts";
import { moveNode } from "#shared/trees/edits/move-node.ts";
import { insertPin, movePin, removePin, setLeg } from "#shared/trees/edits/move-pin.ts";
import { reRoot } from "#shared/trees/edits/re-root.ts";
import { reRoute } from "#shared/trees/edits/re-route.ts";
import { renameTree } from "#shared/trees/edits/rename-tree.ts";
import { setLabels } from "#shared/trees/edits/set-labels.ts";
import { setLandmarks } from "#shared/trees/edits/set-landmarks.ts";
import { splitFork } from "#shared/trees/edits/split-fork.ts";
import { startBranch } from "#shared/trees/edits/start-branch.ts";
import { startTree } from "#shared/trees/edits/start-tree.ts";
import { takeBackPin } from "#shared/trees/edits/take-back-pin.ts";
import { takeInTrees } from "#shared/trees/edits/take-in-trees.ts";
import { pinsOf, polylineOf } from "#shared/trees/geometry.ts";
import { IdSource, NO_IDS_YET } from "#shared/trees/ids.ts";
import { drawn } from "./drawn-curve.ts";
import { pick } from "./seeded-random.ts";

type Maker = (document: TreeDocument, ids: IdSource, random: () => number) => EditPlan | null;

const somewhere = (random: () => number): Vec3 => pointMm(random() * 40, random() * 40, random() * 40);
const nodeIn = (d: TreeDocument, r: () => number) => pick(r, [...d.nodes.keys()]);
const strandIn = (d: TreeDocument, r: () => number) => pick(r, [...d.strands.values()]);
const on = (d: TreeDocument, s: Strand, r: () => number): Vec3 => pick(r, polylineOf(d, s))!;

function anchor(d: TreeDocument, r: () => number): Anchor | null {
  const strand = strandIn(d, r);
  if (strand && r() < 0.7) return { strand: strand.id, near: on(d, strand, r) };
  const node = nodeIn(d, r);
  return node ? { node } : null;
}

/** A small tree of its own, as a file would bring it. */
function file(random: () => number): TreeDocument {
  const ids = new IdSource(NO_IDS_YET);
  let document = emptyDocument();
  const make = (plan: EditPlan) => {
    const { operation, curves } = drawn(plan, ids);
    document = apply(withCurves(document, curves), operation).document;
  };
  make(startTree(document, ids, { at: somewhere(random), site: "head", muscle: "antero-lateral" }));
  make(extendStrand(document, ids, { node: "n1", to: somewhere(random) }));
  make(startBranch(document, ids, { on: { strand: "s1", near: somewhere(random) }, to: somewhere(random) }));
  return document;
}

/** Every kind of edit by its weight; null when the document has nothing to make it on. */
export const EDITS: Readonly<Record<string, readonly [number, Maker]>> = {
  startTree: [
    3,
    (d, ids, r) =>
      startTree(d, ids, {
        at: somewhere(r),
        site: "head",
        ...(r() < 0.8 ? { muscle: pick(r, ["antero-lateral", "postero-medial"] as const)! } : {}),
      }),
  ],
  extendStrand: [
    12,
    (d, ids, r) => {
      const node = nodeIn(d, r);
      const through = r() < 0.3 ? [somewhere(r), somewhere(r)] : [];
      return node ? extendStrand(d, ids, { node, to: somewhere(r), through, leg: r() < 0.2 ? "straight" : "guide" }) : null;
    },
  ],
  startBranch: [
    8,
    (d, ids, r) => {
      const at = anchor(d, r);
      return at ? startBranch(d, ids, { on: at, ...(r() < 0.9 ? { to: somewhere(r) } : {}) }) : null;
    },
  ],
  endStrand: [
    6,
    (d, ids, r) => {
      const node = nodeIn(d, r);
      return node ? endStrand(d, ids, { node, kind: pick(r, END_KINDS)!, ...(r() < 0.5 ? { to: somewhere(r) } : {}) }) : null;
    },
  ],
  takeBackPin: [4, (d, ids, r) => withNode(d, r, (node) => takeBackPin(d, ids, { node }))],
  addCrossLink: [
    3,
    (d, ids, r) => {
      const [from, to] = [anchor(d, r), anchor(d, r)];
      return from && to ? addCrossLink(d, ids, { from, to, via: r() < 0.5 ? [somewhere(r)] : [] }) : null;
    },
  ],
  deleteCrossLink: [
    2,
    (d, ids, r) => {
      const crossLink = pick(r, [...d.crossLinks.keys()]);
      return crossLink ? deleteCrossLink(d, ids, { crossLink }) : null;
    },
  ],
  moveNode: [4, (d, ids, r) => withNode(d, r, (node) => moveNode(d, ids, { node, to: somewhere(r) }))],
  movePin: [
    3,
    (d, ids, r) => {
      const line = pick(
        r,
        [...d.strands.values(), ...d.crossLinks.values()].filter((l) => l.via.length > 0),
      );
      return line ? movePin(d, ids, { line: line.id, index: Math.floor(r() * line.via.length), to: somewhere(r) }) : null;
    },
  ],
  insertPin: [
    3,
    (d, ids, r) => {
      const line = pick(r, [...d.strands.values(), ...d.crossLinks.values()]);
      return line ? insertPin(d, ids, { line: line.id, at: somewhere(r) }) : null;
    },
  ],
  removePin: [
    2,
    (d, ids, r) => {
      const line = pick(
        r,
        [...d.strands.values(), ...d.crossLinks.values()].filter((l) => l.via.length > 0),
      );
      return line ? removePin(d, ids, { line: line.id, index: Math.floor(r() * line.via.length) }) : null;
    },
  ],
  setLeg: [
    1,
    (d, ids, r) =>
      withStrand(d, r, (s) =>
        setLeg(d, ids, { strand: s.id, leg: Math.floor(r() * (s.via.length + 1)), kind: r() < 0.5 ? "straight" : "guide" }),
      ),
  ],
  reRoute: [
    3,
    (d, ids, r) =>
      withStrand(d, r, (s) =>
        reRoute(d, ids, { strand: s.id, between: [on(d, s, r), on(d, s, r)], through: r() < 0.7 ? [somewhere(r)] : [] }),
      ),
  ],
  cutStrand: [4, (d, ids, r) => withStrand(d, r, (s) => cutStrand(d, ids, { strand: s.id, near: on(d, s, r) }))],
  joinStrands: [
    8,
    (d, ids, r) => {
      const [a, b] = [nodeIn(d, r), nodeIn(d, r)];
      return a && b ? joinStrands(d, ids, { a, b }) : null;
    },
  ],
  dissolve: [2, (d, ids, r) => withNode(d, r, (node) => dissolve(d, ids, { node }))],
  deleteStrand: [3, (d, ids, r) => withStrand(d, r, (s) => deleteStrand(d, ids, { strand: s.id }))],
  deleteTree: [
    1,
    (d, ids, r) => {
      const tree = pick(r, [...d.trees.keys()]);
      return tree ? deleteTree(d, ids, { tree }) : null;
    },
  ],
  reRoot: [2, (d, ids, r) => withNode(d, r, (node) => reRoot(d, ids, { node, site: "wall" }))],
  moveBranch: [
    5,
    (d, ids, r) => {
      const to = anchor(d, r);
      return to ? withStrand(d, r, (s) => moveBranch(d, ids, { strand: s.id, to, ...(r() < 0.2 ? { end: s.to } : {}) })) : null;
    },
  ],
  exchangeTails: [
    5,
    (d, ids, r) =>
      withStrand(d, r, (a) =>
        withStrand(d, r, (b) =>
          exchangeTails(d, ids, { a: { strand: a.id, near: on(d, a, r) }, b: { strand: b.id, near: on(d, b, r) } }),
        ),
      ),
  ],
  splitFork: [
    4,
    (d, ids, r) => {
      const node = pick(
        r,
        [...d.nodes.values()].filter((n) => n.kind === "fork"),
      );
      const strands = [...d.strands.values()].filter((s) => s.from === node?.id || s.to === node?.id);
      return node ? splitFork(d, ids, { node: node.id, moved: strands.slice(-2).map((s) => s.id), to: somewhere(r) }) : null;
    },
  ],
  setLabels: [
    3,
    (d, ids, r) =>
      withNode(d, r, (node) =>
        setLabels(d, ids, {
          nodes: [node],
          node: { leaflet: r() < 0.3 ? null : "anterior", certainty: "doubtful" },
          downwards: r() < 0.5,
        }),
      ),
  ],
  labelStrand: [
    2,
    (d, ids, r) =>
      withStrand(d, r, (s) =>
        setLabels(d, ids, { strands: [s.id], strand: { strut: r() < 0.5, certainty: r() < 0.5 ? null : "doubtful" } }),
      ),
  ],
  renameTree: [
    1,
    (d, ids, r) => {
      const tree = pick(r, [...d.trees.keys()]);
      return tree ? renameTree(d, ids, { tree, name: `PMPM-${Math.floor(r() * 99)}` }) : null;
    },
  ],
  setLandmarks: [
    1,
    (d, ids, r) => setLandmarks(d, ids, { landmarks: { ...d.landmarks, commissures: [pointMm(...somewhere(r))] } }),
  ],
  dismissFinding: [
    1,
    (d, ids, r) => dismissFinding(d, ids, { key: `loop s${Math.floor(r() * 3)}`, reason: r() < 0.3 ? null : "a suture" }),
  ],
  takeInTrees: [1, (d, ids, r) => takeInTrees(d, ids, { incoming: file(r) })],
};

const BAG = Object.entries(EDITS).flatMap(([name, [weight]]) => new Array<string>(weight).fill(name));

/** A random edit that the document allows, or null when this draw was refused (as a person's click can be). */
export function seededEdit(document: TreeDocument, ids: IdSource, random: () => number): { name: string; plan: EditPlan } | null {
  const name = pick(random, BAG)!;
  try {
    const plan = EDITS[name]![1](document, ids, random);
    return plan && { name, plan };
  } catch (error) {
    if (isTautlineError(error, "misuse")) return null;
    throw error;
  }
}

function withNode(d: TreeDocument, r: () => number, make: (node: NodeId) => EditPlan | null): EditPlan | null {
  const node = nodeIn(d, r);
  return node ? make(node) : null;
}

function withStrand(d: TreeDocument, r: () => number, make: (strand: Strand) => EditPlan | null): EditPlan | null {
  const strand = strandIn(d, r);
  return strand ? make(strand) : null;
}

/** Pins and nodes of a document, for messages of failing tests. */
export function described(document: TreeDocument): string {
  return [...document.strands.values()].map((s) => `${s.id} ${s.from}-${s.to} ${JSON.stringify(pinsOf(document, s))}`).join("\n");
}
