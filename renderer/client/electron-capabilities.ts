import type { Capabilities } from "#shared/api/capabilities.ts";

/** The functions that the desktop shell's preload puts on `window.tautline`; one object argument, one promise each. */
export interface DesktopBridge {
  pickScan(argument: Record<string, never>): Promise<{ path: string | null }>;
  pickSavePath(argument: { suggestedName: string }): Promise<{ path: string | null }>;
  showInFolder(argument: { path: string }): Promise<unknown>;
  /** Path of a dropped file; empty when it has none. */
  pathOfDropped(file: unknown): string;
}

/** What the desktop shell can do: the system's own dialogs, and paths of dropped files. */
export function desktopCapabilities(bridge: DesktopBridge): Capabilities {
  return {
    shell: "electron",
    pickScan: async () => (await bridge.pickScan({})).path,
    pickSavePath: async (suggestedName) => (await bridge.pickSavePath({ suggestedName })).path,
    pathOfDropped: (file) => bridge.pathOfDropped(file) || null,
    showInFolder: async (path) => void (await bridge.showInFolder({ path })),
  };
}
