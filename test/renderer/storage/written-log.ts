import { pointMm } from "#shared/geometry/types.ts";
import { PassHistory, type Stamp } from "#shared/log/history.ts";
import { startTree } from "#shared/trees/edits/start-tree.ts";

let mono = 0;
export const stamp = (session = "w"): Stamp => {
  mono += 500;
  return { t: 1_800_000_000_000 + mono, mono, session };
};

/** A new pass with one line. */
export function begun(epoch = "e1") {
  return PassHistory.begin({ pass: "p1", specimen: "hb07", annotator: "AN-1", number: 1, epoch }, stamp());
}

/** One edit: another tree. @returns its lines */
export function edit(history: PassHistory, x = history.edits): string[] {
  const plan = startTree(history.document, history.ids(), { at: pointMm(x, 0, 0), site: "head" });
  return history.commit(plan.operation, "Start a tree", [], stamp());
}
