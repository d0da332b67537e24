import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import type { ShownFinding } from "#renderer/desk/model/findings.ts";
import { selectLine, selectNode } from "#renderer/editor/selection.ts";
import { pointMm } from "#shared/geometry/types.ts";
import type { NodeId, StrandId } from "#shared/trees/document.ts";

/** Shows a finding: its place in the section, what it is about selected. */
export function goToFinding(model: DeskModel, finding: ShownFinding): void {
  const { editor, section } = model;
  const document = editor.document.value;
  model.tab.value = "findings";
  model.findingAt.value = finding.key;
  const { node, strand, position } = finding.at;
  if (node !== null && document.nodes.has(node as NodeId)) editor.selection.value = selectNode(document, node as NodeId);
  else if (strand !== null) editor.selection.value = selectLine(document, strand as StrandId);
  if (position !== null) section.goTo(pointMm(position[0], position[1], position[2]));
}

/** The next or previous finding that still stands. */
export function stepFinding(model: DeskModel, by: 1 | -1): void {
  const standing = model.findings.value.filter((finding) => finding.dismissed === null);
  if (standing.length === 0) {
    model.services.notices.news("No finding is left.");
    return;
  }
  const at = standing.findIndex((finding) => finding.key === model.findingAt.value);
  const next = at < 0 ? (by === 1 ? 0 : standing.length - 1) : (at + by + standing.length) % standing.length;
  goToFinding(model, standing[next]!);
}
