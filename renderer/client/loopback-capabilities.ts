import type { Capabilities } from "#shared/api/capabilities.ts";

/** What a path is asked for. */
export type WantedPath = "scan" | "packet" | "folder";

/**
 * What a page in a browser can do: choose from folders that the server lists, and save as a download.
 * @param askForPath shows the page's own dialog and gives the chosen path, or null.
 */
export function loopbackCapabilities(askForPath: (wanted: WantedPath) => Promise<string | null>): Capabilities {
  return {
    shell: "loopback",
    pickScan: () => askForPath("scan"),
    pickPacket: () => askForPath("packet"),
    pickFolder: () => askForPath("folder"),
    pickSavePath: () => Promise.resolve("download"),
    pathOfDropped: () => null,
    showInFolder: () => Promise.resolve(),
    menus: null,
  };
}
