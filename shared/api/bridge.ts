import type { Capabilities } from "#shared/api/capabilities.ts";
import type { MenuTable } from "#shared/api/menu.ts";
import { decodeError, type ErrorBody } from "#shared/errors.ts";

/** Every call of the page to the desktop shell: name -> argument and result. One object in, one promise out. */
export interface BridgeCalls {
  /** The system's dialog for a file (of a scan, a packet) or a folder; null = the person changed their mind. */
  pickScan: { readonly argument: { readonly folder: boolean }; readonly result: string | null };
  /** The system's dialog for where to save. */
  pickSavePath: { readonly argument: { readonly suggestedName: string }; readonly result: string | null };
  showInFolder: { readonly argument: { readonly path: string }; readonly result: null };
  setMenu: { readonly argument: MenuTable; readonly result: null };
}
export type BridgeCall = keyof BridgeCalls;

/** Channel of each call; the only ones the shell listens on. */
export const BRIDGE_CHANNELS: Readonly<Record<BridgeCall, string>> = {
  pickScan: "tautline:pick-scan",
  pickSavePath: "tautline:pick-save-path",
  showInFolder: "tautline:show-in-folder",
  setMenu: "tautline:set-menu",
};

/** Channel on which the shell tells the page that a menu's command was chosen; its message is the command's name. */
export const COMMAND_CHANNEL = "tautline:command";

/** What comes back over a channel: errors cross as tag, fields and sentence. */
export type BridgeReply<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly error: ErrorBody };

/** What the preload gives the page as `window.tautline`: these functions and nothing else. */
export type Bridge = {
  readonly [Name in BridgeCall]: (argument: BridgeCalls[Name]["argument"]) => Promise<BridgeReply<BridgeCalls[Name]["result"]>>;
} & {
  /** Path of a dropped file; empty when it has none. */
  pathOfDropped(file: unknown): string;
  /** Calls `listener` with the name of each command chosen in a menu, until the returned function is called. */
  onCommand(listener: (name: string) => void): () => void;
};

/** Name of the bridge in the page's global scope. */
export const BRIDGE_NAME = "tautline";

/** The value of a reply. @throws the error that it carries */
export function valueOfReply<T>(reply: BridgeReply<T>): T {
  if (reply.ok) return reply.value;
  throw decodeError(reply.error);
}

/** The desktop shell's abilities over its bridge. */
export function desktopCapabilities(bridge: Bridge): Capabilities {
  return {
    shell: "electron",
    pickScan: async () => valueOfReply(await bridge.pickScan({ folder: false })),
    pickPacket: async () => valueOfReply(await bridge.pickScan({ folder: false })),
    pickFolder: async () => valueOfReply(await bridge.pickScan({ folder: true })),
    pickSavePath: async (suggestedName) => valueOfReply(await bridge.pickSavePath({ suggestedName })),
    pathOfDropped: (file) => bridge.pathOfDropped(file) || null,
    showInFolder: async (path) => void valueOfReply(await bridge.showInFolder({ path })),
    menus: {
      show: async (table) => void valueOfReply(await bridge.setMenu(table)),
      onChosen: (listener) => bridge.onCommand(listener),
    },
  };
}
