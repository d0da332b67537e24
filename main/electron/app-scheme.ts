import { app, protocol } from "electron";
import { APP_SCHEME } from "#main/electron/own-address.ts";
import type { Handler } from "#main/http/handler.ts";

/** Makes the scheme a standard, secure one; once, before the app is ready. No bypass of the content rules. */
export function registerScheme(): void {
  const privileges = { standard: true, secure: true, supportFetchAPI: true, stream: true };
  protocol.registerSchemesAsPrivileged([{ scheme: APP_SCHEME, privileges }]);
}

/** Answers the scheme's requests with the one handler. @returns undoes it */
export function serveScheme(handler: Handler): () => void {
  protocol.handle(APP_SCHEME, (request) => handler(request));
  return () => {
    if (app.isReady()) protocol.unhandle(APP_SCHEME);
  };
}
