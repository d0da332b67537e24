import type { Event, Session, WebContents } from "electron";
import { isOwnAddress } from "#main/electron/own-address.ts";

/** The part of a page's contents that the rules hold on to. */
export type RuledContents = Pick<WebContents, "setWindowOpenHandler"> & {
  on(event: string, listener: (event: Pick<Event, "preventDefault">, ...details: unknown[]) => void): unknown;
};

/**
 * Keeps contents on the app's own pages: no other address in any frame, no new window, no guest page.
 * @param askToOpen gets the address of a link that wanted a new window; the person is asked about the system's browser
 */
export function keepAtHome(contents: RuledContents, askToOpen: (address: string) => void): void {
  const refuseForeign = (event: Pick<Event, "preventDefault"> & { url?: string }, ...details: unknown[]) => {
    const address = event.url ?? (typeof details[0] === "string" ? details[0] : "");
    if (!isOwnAddress(address)) event.preventDefault();
  };
  contents.on("will-navigate", refuseForeign);
  contents.on("will-redirect", refuseForeign);
  contents.on("will-frame-navigate", refuseForeign);
  contents.on("will-attach-webview", (event) => event.preventDefault());
  contents.setWindowOpenHandler(({ url }) => {
    askToOpen(url);
    return { action: "deny" };
  });
}

/** Permissions a page may have. None: the program needs no camera, place, notification or device. */
export const ALLOWED_PERMISSIONS: ReadonlySet<string> = new Set();

/** The part of a session that the rules hold on to. */
export type RuledSession = Pick<
  Session,
  "setPermissionRequestHandler" | "setPermissionCheckHandler" | "setDevicePermissionHandler"
>;

/** Refuses every permission, when it is asked for and when it is only looked up. */
export function refusePermissions(session: RuledSession): void {
  session.setPermissionRequestHandler((_contents, permission, answer) => answer(ALLOWED_PERMISSIONS.has(permission)));
  session.setPermissionCheckHandler((_contents, permission) => ALLOWED_PERMISSIONS.has(permission));
  session.setDevicePermissionHandler(() => false);
}
