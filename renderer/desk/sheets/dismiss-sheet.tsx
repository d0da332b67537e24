import { whatToDismiss } from "#renderer/desk/model/what-to-dismiss.ts";
import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import { TextSheet } from "#renderer/desk/sheets/text-sheet.tsx";

/** Sets a finding or an overlooked stretch aside; the reason is kept with the trees. */
export function DismissSheet({ model, close }: DeskSheetProps) {
  const what = whatToDismiss(model);
  if (what === null) return null;
  return (
    <TextSheet
      title={what.title}
      label={what.question}
      first=""
      done="Dismiss"
      close={close}
      take={(reason) => model.editor.do({ do: "dismiss", args: { key: what.key, reason } })}
    />
  );
}
