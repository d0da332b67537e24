import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import type { ShownFinding } from "#renderer/desk/model/findings.ts";
import { goToStretch } from "#renderer/desk/model/go-to-overlooked.ts";
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

/** The next or previous finding that still stands; past the last one, the overlooked stretches, longest first. */
export function stepFinding(model: DeskModel, by: 1 | -1): void {
  const findings = model.findings.value.filter((finding) => finding.dismissed === null);
  const steps = [
    ...findings.map((finding) => ({ key: finding.key, go: () => goToFinding(model, finding) })),
    ...model.overlooked.standing.value.map((stretch) => ({ key: stretch.key, go: () => goToStretch(model, stretch) })),
  ];
  if (steps.length === 0) {
    model.services.notices.news("No finding is left, and no overlooked stretch is known.");
    return;
  }
  const current = model.tab.value === "overlooked" ? model.overlooked.at.value : model.findingAt.value;
  const at = steps.findIndex(({ key }) => key === current);
  const next = at < 0 ? (by === 1 ? 0 : steps.length - 1) : (at + by + steps.length) % steps.length;
  steps[next]!.go();
}
