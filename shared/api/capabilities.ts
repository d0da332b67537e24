import type { MenuTable } from "#shared/api/menu.ts";

/** What a shell can do for the page; one implementation per shell, chosen at the entry point. */
export interface Capabilities {
  readonly shell: "electron" | "loopback";
  /** Asks the person for a scan (file or folder) on this computer; null = they changed their mind. */
  pickScan(): Promise<string | null>;
  /** Asks the person for a packet (zip file or folder) on this computer; null = they changed their mind. */
  pickPacket(): Promise<string | null>;
  /** Asks the person for a folder on this computer; null = they changed their mind. */
  pickFolder(): Promise<string | null>;
  /** Asks where to save; null = cancelled; "download" = the page offers the bytes itself. */
  pickSavePath(suggestedName: string): Promise<string | "download" | null>;
  /** Path of a dropped file; null when the shell cannot know it. */
  pathOfDropped(file: unknown): string | null;
  showInFolder(path: string): Promise<void>;
  /** The window's menus, where the shell has any. */
  readonly menus: MenuCapability | null;
}

export interface MenuCapability {
  show(table: MenuTable): Promise<void>;
  /** Calls `listener` with the name of each command chosen, until the returned function is called. */
  onChosen(listener: (name: string) => void): () => void;
}
