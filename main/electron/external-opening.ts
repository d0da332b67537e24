import { dialog, shell } from "electron";
import type { ExternalOpening } from "#main/electron/open-external.ts";

/** Asks in a dialog of the system that shows the whole address. */
export const externalOpening: ExternalOpening = {
  async confirm(address) {
    const { response } = await dialog.showMessageBox({
      type: "question",
      message: "Open this address in your browser?",
      detail: address,
      buttons: ["Open", "Cancel"],
      defaultId: 1,
      cancelId: 1,
    });
    return response === 0;
  },
  open: (address) => shell.openExternal(address),
};
