import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import { TextSheet } from "#renderer/desk/sheets/text-sheet.tsx";

/** Sets a finding aside; the reason is kept with the trees. */
export function DismissSheet({ model, close }: DeskSheetProps) {
  const finding = model.findings.value.find((one) => one.key === model.findingAt.value);
  if (finding === undefined) return null;
  return (
    <TextSheet
      title="Dismiss the finding"
      label={`${finding.message} Why is it none?`}
      first=""
      done="Dismiss"
      close={close}
      take={(reason) => model.editor.do({ do: "dismiss", args: { key: finding.key, reason } })}
    />
  );
}
