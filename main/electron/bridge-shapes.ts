import { flag, list, object, oneOf, optional, refuse, type Shape, text } from "#main/http/shape.ts";
import type { BridgeCall, BridgeCalls } from "#shared/api/bridge.ts";
import type { MenuTable } from "#shared/api/menu.ts";

const words = text(200, 1);
const command = object({ kind: oneOf("command"), name: words, label: words, shortcut: optional(text(60)), enabled: flag });
const line = object({ kind: oneOf("line") });
const item: Shape<MenuTable["menus"][number]["items"][number]> = (value, where) =>
  (value as { kind?: unknown } | null)?.kind === "line" ? line(value, where) : command(value, where);

/** A file's name without any folder. */
const fileName: Shape<string> = (value, where) => {
  const name = text(255, 1)(value, where);
  if (/[/\\:\0]/.test(name) || name === "." || name === "..") throw refuse(where, "a file name without a folder", value);
  return name;
};

const SHAPES: { readonly [Name in BridgeCall]: Shape<BridgeCalls[Name]["argument"]> } = {
  pickScan: object({ folder: flag }),
  pickSavePath: object({ suggestedName: fileName }),
  showInFolder: object({ path: text(4096, 1) }),
  setMenu: object({ menus: list(object({ label: words, items: list(item, 200) }), 20) }),
};

/** The argument of a call, checked. @throws bad-request */
export function checkArgument<Name extends BridgeCall>(name: Name, argument: unknown): BridgeCalls[Name]["argument"] {
  return SHAPES[name](argument, name);
}
