import { pointMm } from "#shared/geometry/types.ts";
import { apply, withCurves } from "#shared/trees/apply.ts";
import { emptyDocument, type TreeDocument } from "#shared/trees/document.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { extendStrand } from "#shared/trees/edits/extend-strand.ts";
import { startBranch } from "#shared/trees/edits/start-branch.ts";
import { startTree } from "#shared/trees/edits/start-tree.ts";
import { countersOf, IdSource } from "#shared/trees/ids.ts";
import { drawn } from "./drawn-curve.ts";

export const at = pointMm;

/** The document after an edit whose curves are drawn; `made` gives the plan on the document as it is. */
export function edited(document: TreeDocument, made: (document: TreeDocument, ids: IdSource) => EditPlan): TreeDocument {
  const ids = new IdSource(countersOf(document));
  const { operation, curves } = drawn(made(document, ids), ids);
  return apply(withCurves(document, curves), operation).document;
}

/** An origin at (0, 0, 0) of t1. */
export function origin(): TreeDocument {
  return edited(emptyDocument(), (d, ids) =>
    startTree(d, ids, { at: at(0, 0, 0), site: "head", muscle: "antero-lateral", head: 1 }),
  );
}

/** One strand s1 from the origin n1 over pins at x = 4 and 8 to the open end n2 at x = 12. */
export function string(): TreeDocument {
  let document = origin();
  document = edited(document, (d, ids) => extendStrand(d, ids, { node: "n1", to: at(4, 0, 0) }));
  document = edited(document, (d, ids) => extendStrand(d, ids, { node: "n2", to: at(8, 0, 0), leg: "straight" }));
  return edited(document, (d, ids) => extendStrand(d, ids, { node: "n2", to: at(12, 0, 0) }));
}

/** The string with a fork n3 at x = 6: s1 from n1, s2 on to n2, and the branch s3 to n4 at (6, 5, 0). */
export function fork(): TreeDocument {
  return edited(string(), (d, ids) => startBranch(d, ids, { on: { strand: "s1", near: at(6, 1, 0) }, to: at(6, 5, 0) }));
}

/** A second tree t2, further off: n5 at y = 20, straight to n6 at x = 12 by strand s4. */
export function twoTrees(): TreeDocument {
  let document = fork();
  document = edited(document, (d, ids) => startTree(d, ids, { at: at(0, 20, 0), site: "head", muscle: "postero-medial" }));
  return edited(document, (d, ids) => extendStrand(d, ids, { node: "n5", to: at(12, 20, 0) }));
}
