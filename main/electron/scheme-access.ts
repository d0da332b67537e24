import { APP_HOST, APP_SCHEME } from "#main/electron/own-address.ts";
import type { Access } from "#main/http/access.ts";

/** Only the app's own pages reach the scheme: no token is needed. */
export const SCHEME_ACCESS: Access = { protocol: `${APP_SCHEME}:`, host: APP_HOST, token: null };
