import { Sheet } from "#renderer/app/sheet.tsx";
import { KeyGroups } from "#renderer/desk/sheets/key-groups.tsx";
import { ExportComparisonSheet } from "#renderer/study/side-by-side/export-comparison-sheet.tsx";
import { SIDE_BY_SIDE_COMMANDS } from "#renderer/study/side-by-side/side-by-side-commands.ts";
import type { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import { SidesSheet } from "#renderer/study/side-by-side/sides-sheet.tsx";

/** The sheet that is open, if any. */
export function SideBySideSheets({ model }: { readonly model: SideBySideModel }) {
  const close = () => {
    model.sheet.value = null;
  };
  switch (model.sheet.value) {
    case null:
      return null;
    case "keys":
      return (
        <Sheet title="Keys" close={close} kind="wide-sheet">
          <div class="key-columns">
            <KeyGroups commands={SIDE_BY_SIDE_COMMANDS} />
          </div>
        </Sheet>
      );
    case "export":
      return <ExportComparisonSheet model={model} close={close} />;
    case "sides": {
      const specimen = model.specimen.value;
      return (
        <SidesSheet
          specimen={specimen}
          passes={model.passes}
          now={model.names}
          close={close}
          show={(a, b) => {
            close();
            model.services.goTo({ screen: "side-by-side", specimen: specimen.id, a, b });
          }}
        />
      );
    }
  }
}
