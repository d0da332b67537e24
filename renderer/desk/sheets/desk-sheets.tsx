import { AboutSheet } from "#renderer/app/about-sheet.tsx";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { OpenEndsSheet, RulesSheet } from "#renderer/desk/sheets/assignment-sheets.tsx";
import { DismissSheet } from "#renderer/desk/sheets/dismiss-sheet.tsx";
import { ExportSheet } from "#renderer/desk/sheets/export-sheet.tsx";
import { KeySheet } from "#renderer/desk/sheets/key-sheet.tsx";
import { MenuSheet } from "#renderer/desk/sheets/menu-sheet.tsx";
import { Palette } from "#renderer/desk/sheets/palette.tsx";
import { RadiusSheet } from "#renderer/desk/sheets/radius-sheet.tsx";
import { TakeInSheet } from "#renderer/desk/sheets/take-in-sheet.tsx";
import { TextSheet } from "#renderer/desk/sheets/text-sheet.tsx";
import { UprightSheet } from "#renderer/desk/sheets/upright-sheet.tsx";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

/** The sheet that is open, if any. */
export function DeskSheets({ model, context }: { readonly model: DeskModel; readonly context: DeskContext }) {
  const close = () => {
    model.sheet.value = null;
  };
  const props = { model, context, close };
  const { editor } = model;
  switch (model.sheet.value) {
    case null:
      return null;
    case "palette":
      return <Palette {...props} />;
    case "keys":
      return <KeySheet close={close} />;
    case "menu":
      return <MenuSheet {...props} />;
    case "export":
      return <ExportSheet {...props} />;
    case "take-in":
      return <TakeInSheet {...props} />;
    case "about":
      return <AboutSheet client={model.services.client} close={close} />;
    case "dismiss":
      return <DismissSheet {...props} />;
    case "radius":
      return <RadiusSheet {...props} />;
    case "rules":
      return <RulesSheet {...props} />;
    case "open-ends":
      return <OpenEndsSheet {...props} />;
    case "upright":
      return <UprightSheet {...props} />;
    case "mark":
      return (
        <TextSheet
          title="Name this point of the history"
          label="Name"
          first=""
          done="Mark"
          close={close}
          take={(name) => editor.do({ do: "mark", name })}
        />
      );
    case "rename": {
      const id = editor.selection.value.tree;
      const tree = id === undefined ? undefined : editor.document.value.trees.get(id);
      if (tree === undefined) return null;
      return (
        <TextSheet
          title={`Rename ${tree.name}`}
          label="Name of the tree"
          first={tree.name}
          done="Rename"
          close={close}
          take={(name) => editor.do({ do: "rename", args: { tree: tree.id, name } })}
        />
      );
    }
  }
}
