import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import type { Muscle, OriginSite, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { freeName } from "#shared/trees/edits/rename-tree.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import { nextTreeName } from "#shared/trees/names.ts";

/** The origin of a new tree. */
export interface StartTreeArgs {
  readonly at: Vec3;
  readonly site: OriginSite;
  readonly muscle?: Muscle;
  /** Number of the papillary muscle head. */
  readonly head?: number;
  /** Left out: the next free name of the muscle. */
  readonly name?: string;
}

/** Plan of a new tree that is its origin only. @throws misuse when the name is taken */
export function startTree(document: TreeDocument, ids: IdSource, args: StartTreeArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const { muscle, head } = args;
  const id = ids.next("tree");
  const root = ids.next("node");
  const name = args.name === undefined ? nextTreeName(document, muscle) : freeName(document, args.name, id);
  draft.putTree({ id, name, root });
  draft.putNode({
    id: root,
    tree: id,
    kind: "origin",
    position: roundPoint(args.at),
    site: args.site,
    ...(muscle && { muscle }),
    ...(head !== undefined && { head }),
  });
  return draft.finish("start-tree");
}
