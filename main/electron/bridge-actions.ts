import { basename, isAbsolute } from "node:path";
import { type BrowserWindow, dialog, Menu, shell } from "electron";
import type { BridgeActions } from "#main/electron/bridge-host.ts";
import { menuTemplate } from "#main/electron/menu-template.ts";
import { COMMAND_CHANNEL } from "#shared/api/bridge.ts";
import { TautlineError } from "#shared/errors.ts";

/** What the page may ask of the desktop: the system's dialogs, a file's folder, its menus. */
export function bridgeActions(window: BrowserWindow): BridgeActions {
  return {
    async pickScan({ folder }) {
      const properties: ("openFile" | "openDirectory")[] = folder ? ["openDirectory"] : ["openFile"];
      const title = folder ? "Choose a folder" : "Choose a file";
      const { canceled, filePaths } = await dialog.showOpenDialog(window, { title, properties });
      return canceled ? null : (filePaths[0] ?? null);
    },
    async pickSavePath({ suggestedName }) {
      const { canceled, filePath } = await dialog.showSaveDialog(window, { title: "Save", defaultPath: suggestedName });
      return canceled || !filePath ? null : filePath;
    },
    async showInFolder({ path }) {
      if (!isAbsolute(path)) {
        const what = `expected a whole path, found ${basename(path)}`;
        throw new TautlineError("bad-request", `The file cannot be shown: ${what}.`, { what, where: "showInFolder.path" });
      }
      // Shows the file among others and opens nothing.
      shell.showItemInFolder(path);
      return null;
    },
    async setMenu(table) {
      const choose = (name: string) => window.webContents.send(COMMAND_CHANNEL, name);
      Menu.setApplicationMenu(Menu.buildFromTemplate(menuTemplate(table, process.platform, choose)));
      return null;
    },
  };
}
