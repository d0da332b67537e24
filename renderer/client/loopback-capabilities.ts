import type { Capabilities } from "#shared/api/capabilities.ts";

/**
 * What a page in a browser can do: choose from folders that the server lists, and save as a download.
 * @param askForScan shows the page's own dialog and gives the chosen path, or null.
 */
export function loopbackCapabilities(askForScan: () => Promise<string | null>): Capabilities {
  return {
    shell: "loopback",
    pickScan: askForScan,
    pickSavePath: () => Promise.resolve("download"),
    pathOfDropped: () => null,
    showInFolder: () => Promise.resolve(),
    menus: null,
  };
}
