import { app, protocol } from "electron";
import { APP_SCHEME, SCHEME_PRIVILEGES } from "#main/electron/own-address.ts";
import type { Handler } from "#main/http/handler.ts";

/** Makes the scheme a standard, secure one; once, before the app is ready. */
export function registerScheme(): void {
  protocol.registerSchemesAsPrivileged([{ scheme: APP_SCHEME, privileges: { ...SCHEME_PRIVILEGES } }]);
}

/** Answers the scheme's requests with the one handler. @returns undoes it */
export function serveScheme(handler: Handler): () => void {
  protocol.handle(APP_SCHEME, (request) => handler(request));
  return () => {
    if (app.isReady()) protocol.unhandle(APP_SCHEME);
  };
}
