import type { Intent } from "#renderer/editor/session/intent.ts";
import { inOne, type MakePlan, makeEdit, type Stage, settlePlace } from "#renderer/editor/session/stage.ts";
import { stickyEndLabels } from "#renderer/editor/session/sticky-labels.ts";
import { KIND_WORDS, treeName } from "#renderer/editor/session/words.ts";
import type { IntentPlace } from "#renderer/editor/tracing/intent-place.ts";
import { settleAnchor } from "#renderer/editor/tracing/passing.ts";
import { goingOnFrom, NOTHING, tipPlace, withOtherLeg } from "#renderer/editor/tracing/under-way.ts";
import { TautlineError } from "#shared/errors.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import { strandsAt } from "#shared/trees/adjacency.ts";
import type { EndKind, NodeId, TreeDocument } from "#shared/trees/document.ts";
import { addCrossLink } from "#shared/trees/edits/add-cross-link.ts";
import type { Anchor } from "#shared/trees/edits/anchor.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { endStrand } from "#shared/trees/edits/end-strand.ts";
import { extendStrand } from "#shared/trees/edits/extend-strand.ts";
import { inheritedLabels } from "#shared/trees/edits/node-labels.ts";
import { isSamePlace } from "#shared/trees/edits/pin-run.ts";
import { placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { nodeOf, strandOf } from "#shared/trees/edits/refusal.ts";
import { isLooseEnd } from "#shared/trees/edits/rewiring.ts";
import { startBranch } from "#shared/trees/edits/start-branch.ts";
import { startTree } from "#shared/trees/edits/start-tree.ts";
import { takeBackPin } from "#shared/trees/edits/take-back-pin.ts";

export type TracingIntent = Extract<
  Intent,
  { readonly do: "pin" | "end" | "branch" | "link" | "resume" | "straight" | "back" | "leave" }
>;

/** Carries out an intent of tracing and moves on what is under way. */
export async function performTracing(stage: Stage, intent: TracingIntent, signal: AbortSignal): Promise<void> {
  const { document } = stage.keeper;
  switch (intent.do) {
    case "pin":
      return pin(stage, intent.at, signal);
    case "end":
      return end(stage, intent.kind, intent.at, signal);
    case "branch": {
      const on = settleAnchor(document, intent.from);
      const node = nodeAt(document, on);
      stage.underWay = node !== null ? goingOnFrom(node) : { kind: "branch", on, point: pointOf(document, on), leg: "guide" };
      return;
    }
    case "link":
      return link(stage, settleAnchor(document, intent.to), signal);
    case "resume":
      stage.underWay = goingOnFrom(nodeOf(document, intent.node).id);
      return;
    case "straight":
      stage.underWay = withOtherLeg(stage.underWay);
      return;
    case "back":
      return back(stage, signal);
    case "leave":
      stage.underWay = NOTHING;
  }
}

async function pin(stage: Stage, at: IntentPlace, signal: AbortSignal): Promise<void> {
  const to = await settlePlace(stage, at);
  const { underWay } = stage;
  switch (underWay.kind) {
    case "nothing": {
      const { site, muscle, head } = stage.sticky();
      const origin = { at: to, site, ...(muscle === null ? {} : { muscle }), ...(head === null ? {} : { head }) };
      const plan = await makeEdit(stage, "Start a tree", (document, ids) => startTree(document, ids, origin), signal);
      stage.underWay = goingOnFrom(addedNode(plan, "origin"));
      return;
    }
    case "strand": {
      const { tip: node, leg } = underWay;
      const plan = await makeEdit(
        stage,
        `Pin on ${treeOfNode(stage, node)}`,
        (document, ids) => extendStrand(document, ids, { node, to, leg }),
        signal,
      );
      stage.underWay = goingOnFrom(openNode(plan, to));
      return;
    }
    case "branch": {
      const { on, leg } = underWay;
      const plan = await makeEdit(
        stage,
        `Branch on ${treeOfAnchor(stage, on)}`,
        (document, ids) => startBranch(document, ids, { on, to, leg }),
        signal,
      );
      stage.underWay = goingOnFrom(openNode(plan, to));
      return;
    }
    case "link":
      stage.underWay = { ...underWay, via: [...underWay.via, to] };
  }
}

async function end(stage: Stage, kind: EndKind, at: IntentPlace | null, signal: AbortSignal): Promise<void> {
  const { underWay } = stage;
  if (underWay.kind !== "strand" && underWay.kind !== "branch") {
    throw new TautlineError(
      "misuse",
      "No strand is under way that could end here. Start one with a click, or go on with an open one (N).",
      {
        what: "end without a strand",
      },
    );
  }
  const aimed = at === null ? null : await settlePlace(stage, at);
  const tip = tipPlace(stage.keeper.document, underWay);
  const to = aimed !== null && tip !== null && isSamePlace(aimed, tip) ? null : aimed;
  const sticky = stage.sticky();
  const close =
    (node: NodeId): MakePlan =>
    (document, ids) =>
      endStrand(document, ids, { node, kind, labels: stickyEndLabels(sticky, kind, inheritedLabels(document, node)) });

  let plan: MakePlan;
  let tree: string;
  if (underWay.kind === "branch") {
    if (to === null) throw endNeedsLength();
    const { on, leg } = underWay;
    tree = treeOfAnchor(stage, on);
    plan = (document, ids) => {
      const branch = startBranch(document, ids, { on, to, leg });
      return inOne(() => branch, close(openNode(branch, to)))(document, ids);
    };
  } else {
    const { tip: node, leg } = underWay;
    tree = treeOfNode(stage, node);
    const isEnd = isLooseEnd(stage.keeper.document, nodeOf(stage.keeper.document, node));
    if (to === null && !isEnd) throw endNeedsLength();
    plan = (document, ids) => {
      if (to === null) return close(node)(document, ids);
      const longer = extendStrand(document, ids, { node, to, leg });
      return inOne(() => longer, close(openNode(longer, to)))(document, ids);
    };
  }
  await makeEdit(stage, `End ${tree}: ${KIND_WORDS[kind]}`, plan, signal);
  stage.underWay = NOTHING;
}

async function link(stage: Stage, to: Anchor, signal: AbortSignal): Promise<void> {
  const { underWay } = stage;
  if (underWay.kind !== "link") {
    stage.underWay = { kind: "link", from: to, point: pointOf(stage.keeper.document, to), via: [] };
    return;
  }
  const { from, via } = underWay;
  await makeEdit(stage, "Cross-link", (document, ids) => addCrossLink(document, ids, { from, to, via }), signal);
  stage.underWay = NOTHING;
}

async function back(stage: Stage, signal: AbortSignal): Promise<void> {
  const { underWay } = stage;
  if (underWay.kind === "nothing") return;
  if (underWay.kind === "branch") {
    stage.underWay = NOTHING;
    return;
  }
  if (underWay.kind === "link") {
    stage.underWay = underWay.via.length === 0 ? NOTHING : { ...underWay, via: underWay.via.slice(0, -1) };
    return;
  }
  const before = stage.keeper.document;
  const node = nodeOf(before, underWay.tip);
  const strands = strandsAt(before, node.id);
  if (strands.length > 0 && !isLooseEnd(before, node)) {
    // Nothing was drawn from this fork or origin yet.
    stage.underWay = NOTHING;
    return;
  }
  await makeEdit(
    stage,
    `Take a pin back on ${treeOfNode(stage, node.id)}`,
    (document, ids) => takeBackPin(document, ids, { node: node.id }),
    signal,
  );
  const { document } = stage.keeper;
  if (document.nodes.has(node.id)) {
    stage.underWay = goingOnFrom(node.id);
    return;
  }
  const strand = strands[0];
  const from = strand === undefined ? null : strand.from === node.id ? strand.to : strand.from;
  if (from === null) {
    stage.underWay = NOTHING;
  } else if (document.nodes.has(from)) {
    stage.underWay = goingOnFrom(from);
  } else {
    // The fork dissolved with its branch: the next pin branches off at its place again.
    const point = before.nodes.get(from)!.position;
    const host = strandsAt(before, from).find((other) => document.strands.has(other.id));
    stage.underWay = host === undefined ? NOTHING : { kind: "branch", on: { strand: host.id, near: point }, point, leg: "guide" };
  }
}

/** The node meant by an anchor: its own, or a strand's end that the place falls on; null = a place along the strand. */
function nodeAt(document: TreeDocument, anchor: Anchor): NodeId | null {
  if ("node" in anchor) return nodeOf(document, anchor.node).id;
  return placeOnLine(document, strandOf(document, anchor.strand), anchor.near).node;
}

function pointOf(document: TreeDocument, anchor: Anchor): PointMm {
  if ("node" in anchor) return nodeOf(document, anchor.node).position;
  return placeOnLine(document, strandOf(document, anchor.strand), anchor.near).point;
}

function addedNode(plan: EditPlan, kind: string): NodeId {
  for (const change of plan.operation.changes) {
    if (change.table === "node" && change.from === null && change.to?.kind === kind) return change.id;
  }
  throw new TautlineError("internal", `The edit made no ${kind}.`, { what: "plan without its node" });
}

/** The open end that a plan leaves at `at`. */
function openNode(plan: EditPlan, at: PointMm): NodeId {
  for (const change of plan.operation.changes) {
    if (change.table === "node" && change.to?.kind === "open" && isSamePlace(change.to.position, at)) return change.id;
  }
  throw new TautlineError("internal", "The edit left no open end.", { what: "plan without its end" });
}

function treeOfNode(stage: Stage, node: NodeId): string {
  const { document } = stage.keeper;
  return treeName(document, nodeOf(document, node).tree);
}

function treeOfAnchor(stage: Stage, anchor: Anchor): string {
  const { document } = stage.keeper;
  return "node" in anchor ? treeOfNode(stage, anchor.node) : treeName(document, strandOf(document, anchor.strand).tree);
}

function endNeedsLength(): TautlineError<"misuse"> {
  return new TautlineError(
    "misuse",
    "A strand that has no length yet cannot end. Move away from its first pin, or take it back (Backspace).",
    {
      what: "end at the beginning",
    },
  );
}
