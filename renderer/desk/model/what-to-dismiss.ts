import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { mmText } from "#renderer/editor/session/words.ts";

/** The finding or overlooked stretch that is looked at and still stands: what dismissing would set aside. */
export function whatToDismiss(
  model: DeskModel,
): { readonly key: string; readonly title: string; readonly question: string } | null {
  if (model.tab.value === "overlooked") {
    const { current } = model.overlooked;
    if (current === null || current.dismissedBy !== null) return null;
    return {
      key: current.key,
      title: "Dismiss the stretch",
      question: `${mmText(current.lengthMm)} that no strand explains. Why is it no chorda (suture, clip, holder ...)?`,
    };
  }
  const finding = model.findings.value.find(({ key }) => key === model.findingAt.value);
  if (finding === undefined || finding.dismissed !== null) return null;
  return { key: finding.key, title: "Dismiss the finding", question: `${finding.message} Why is it none?` };
}
