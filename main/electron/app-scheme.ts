import { app, protocol } from "electron";
import { APP_HOST, APP_SCHEME } from "#main/electron/own-address.ts";
import type { Access } from "#main/http/access.ts";
import type { Handler } from "#main/http/handler.ts";

/** Only the app's own pages reach the scheme: no token is needed. */
export const SCHEME_ACCESS: Access = { protocol: `${APP_SCHEME}:`, host: APP_HOST, token: null };

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
