import type { StrandRequest } from "#shared/tracing/strand-request.ts";
import { DocumentDraft, squash } from "#shared/trees/apply.ts";
import type {
  CrossLink,
  CrossLinkId,
  Curve,
  Dismissal,
  Landmarks,
  NodeId,
  Strand,
  StrandId,
  Tree,
  TreeDocument,
  TreeId,
  TreeNode,
} from "#shared/trees/document.ts";
import type { EditPlan, LineId, LineSolve } from "#shared/trees/edits/edit-plan.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import type { Change, OperationCode } from "#shared/trees/operations.ts";
import { sameRecord } from "#shared/trees/same-record.ts";

/**
 * An edit being planned: single steps on a working copy, gathered into one operation with one change per record. Lines whose
 * pins changed are those whose `curve` was set to null on the way.
 */
export class EditDraft {
  readonly ids: IdSource;
  private readonly start: TreeDocument;
  private readonly draft: DocumentDraft;
  private readonly changes: Change[] = [];
  private readonly curves: Curve[] = [];
  private current: TreeDocument;

  constructor(document: TreeDocument, ids: IdSource) {
    this.start = document;
    this.current = document;
    this.draft = new DocumentDraft(document);
    this.ids = ids;
  }

  /** The document with the steps made so far. */
  get document(): TreeDocument {
    return this.current;
  }

  putTree(tree: Tree): void {
    this.add({ table: "tree", id: tree.id, from: this.current.trees.get(tree.id) ?? null, to: tree });
  }
  putNode(node: TreeNode): void {
    this.add({ table: "node", id: node.id, from: this.current.nodes.get(node.id) ?? null, to: node });
  }
  putStrand(strand: Strand): void {
    this.add({ table: "strand", id: strand.id, from: this.current.strands.get(strand.id) ?? null, to: strand });
  }
  putCrossLink(link: CrossLink): void {
    this.add({ table: "cross-link", id: link.id, from: this.current.crossLinks.get(link.id) ?? null, to: link });
  }
  putLandmarks(landmarks: Landmarks): void {
    this.add({ table: "landmarks", from: this.current.landmarks, to: landmarks });
  }
  putDismissal(key: string, dismissal: Dismissal | null): void {
    this.add({ table: "dismissal", id: key, from: this.current.dismissals.get(key) ?? null, to: dismissal });
  }
  removeTree(id: TreeId): void {
    this.add({ table: "tree", id, from: this.current.trees.get(id) ?? null, to: null });
  }
  removeNode(id: NodeId): void {
    this.add({ table: "node", id, from: this.current.nodes.get(id) ?? null, to: null });
  }
  removeStrand(id: StrandId): void {
    this.add({ table: "strand", id, from: this.current.strands.get(id) ?? null, to: null });
  }
  removeCrossLink(id: CrossLinkId): void {
    this.add({ table: "cross-link", id, from: this.current.crossLinks.get(id) ?? null, to: null });
  }

  /** A curve that needs no solving; a line may name it at once. */
  addCurve(curve: Curve): void {
    this.curves.push(curve);
    this.draft.addCurves([curve]);
    this.current = this.draft.finish();
  }

  /** The plan: net changes, and the lines left without the curve that they had or need. */
  finish(code: OperationCode): EditPlan {
    const net = squash({ code, changes: [] }, { code, changes: this.changes.map((change) => this.withKeptCurve(change)) });
    const solves: LineSolve[] = [];
    for (const change of net.changes) {
      if (change.table !== "strand" && change.table !== "cross-link") continue;
      if (change.to === null || change.to.curve !== null) continue;
      const wasUntraced =
        change.from !== null && change.from.curve === null && sameRequest(this.start, change.from, this.current, change.to);
      if (!wasUntraced) solves.push({ line: change.id as LineId, request: requestOf(this.current, change.to) });
    }
    return { operation: net, solves, curves: this.curves };
  }

  private add(change: Change): void {
    this.changes.push(change);
    this.draft.apply({ code: "set-labels", changes: [change] });
    this.current = this.draft.finish();
  }

  /** A line whose pins came out as they were keeps the curve it had. */
  private withKeptCurve(change: Change): Change {
    if (change.table !== "strand" && change.table !== "cross-link") return change;
    const before = change.table === "strand" ? this.start.strands.get(change.id) : this.start.crossLinks.get(change.id);
    const after = change.table === "strand" ? this.current.strands.get(change.id) : this.current.crossLinks.get(change.id);
    if (
      !before ||
      !after ||
      change.to === null ||
      change.to.curve !== null ||
      !sameRequest(this.start, before, this.current, after)
    ) {
      return change;
    }
    return { ...change, to: { ...change.to, curve: before.curve } } as Change;
  }
}

/** The request that a line's curve is the answer to: its pins, from node to node. */
export function requestOf(document: TreeDocument, line: Strand | CrossLink): StrandRequest {
  const from = document.nodes.get(line.from)!.position;
  const to = document.nodes.get(line.to)!.position;
  const legs = "legs" in line && line.legs ? { legs: line.legs } : {};
  return { from, via: line.via, to, ...legs };
}

function sameRequest(a: TreeDocument, lineA: Strand | CrossLink, b: TreeDocument, lineB: Strand | CrossLink): boolean {
  return sameRecord(requestOf(a, lineA), requestOf(b, lineB));
}
