import type { MenuItemConstructorOptions } from "electron";
import type { MenuTable } from "#shared/api/menu.ts";

/**
 * The application menu: the page's own menus, then what every window of the system has. A command's shortcut is shown but
 * not registered, since the page acts on its keys itself and would otherwise act twice.
 */
export function menuTemplate(
  table: MenuTable,
  platform: NodeJS.Platform,
  choose: (name: string) => void,
): MenuItemConstructorOptions[] {
  const own = table.menus.map(
    ({ label, items }): MenuItemConstructorOptions => ({
      label,
      submenu: items.map((item): MenuItemConstructorOptions => {
        if (item.kind === "line") return { type: "separator" };
        const accelerator = shownAccelerator(item.shortcut, platform);
        const shown = accelerator === null ? {} : { accelerator, registerAccelerator: false };
        return { label: item.label, enabled: item.enabled, click: () => choose(item.name), ...shown };
      }),
    }),
  );
  const first: MenuItemConstructorOptions[] = platform === "darwin" ? [{ role: "appMenu" }] : [];
  return [...first, ...own, { role: "editMenu" }, { role: "windowMenu" }];
}

const KEY_NAMES: Readonly<Record<string, string>> = {
  ArrowUp: "Up",
  ArrowDown: "Down",
  ArrowLeft: "Left",
  ArrowRight: "Right",
  Enter: "Return",
  "+": "Plus",
};
const KEY =
  /^([A-Z0-9]|F([1-9]|1\d|2[0-4])|[!-/:-@[-`{-~]|Up|Down|Left|Right|Home|End|PageUp|PageDown|Return|Space|Tab|Backspace|Delete|Insert|Escape|Plus)$/;

/**
 * A shortcut of the page in the menu's words; null where a menu cannot show it. Never on macOS, whose menus act on every key
 * that they show.
 */
export function shownAccelerator(shortcut: string | undefined, platform: NodeJS.Platform): string | null {
  if (shortcut === undefined || shortcut === "" || platform === "darwin") return null;
  const parts =
    shortcut.endsWith("++") || shortcut === "+"
      ? [...shortcut.slice(0, -1).split("+").filter(Boolean), "+"]
      : shortcut.split("+");
  const key = parts.pop()!;
  const named = KEY_NAMES[key] ?? key;
  const plain = parts.every((part) => ["Ctrl", "Alt", "Shift"].includes(part)) && KEY.test(named);
  return plain ? [...parts, named].join("+") : null;
}
