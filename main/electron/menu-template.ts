import type { MenuItemConstructorOptions } from "electron";
import type { MenuTable } from "#shared/api/bridge.ts";

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
        const shown = item.shortcut === undefined ? {} : { accelerator: item.shortcut, registerAccelerator: false };
        return { label: item.label, enabled: item.enabled, click: () => choose(item.name), ...shown };
      }),
    }),
  );
  const first: MenuItemConstructorOptions[] = platform === "darwin" ? [{ role: "appMenu" }] : [];
  return [...first, ...own, { role: "editMenu" }, { role: "windowMenu" }];
}
