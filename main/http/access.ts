import { equalInConstantTime } from "#main/http/constant-time.ts";
import { TOKEN_HEADER } from "#shared/api/routes.ts";
import { TautlineError } from "#shared/errors.ts";

/** Who may ask: the shell's own scheme and host, and on loopback this run's token. */
export interface Access {
  /** `http:` or the app's own scheme, with the colon. */
  readonly protocol: string;
  /** Host with its port, exactly as the shell's own page asks for it. */
  readonly host: string;
  /** Null where no other program can reach the handler (the app's own scheme). */
  readonly token: string | null;
}

/** Status and reason of a request that is not from the shell's own page, or null when it is. API paths need the token too. */
export function refusedAccess(request: Request, access: Access): { status: number; error: TautlineError } | null {
  const url = new URL(request.url);
  // The Host header is compared as sent: a name that resolves to this computer must not pass for it (DNS rebinding).
  // Where the shell has no Host header (the app's own scheme), the URL says it.
  const host = request.headers.get("host") ?? url.host;
  if (host !== access.host || url.host !== access.host || url.protocol !== access.protocol) {
    return { status: 421, error: refused("This address does not belong to the program.") };
  }
  const origin = request.headers.get("origin");
  if (origin !== null && origin !== `${access.protocol}//${access.host}`) {
    return { status: 403, error: refused("The request comes from another page.") };
  }
  const site = request.headers.get("sec-fetch-site");
  const isApi = url.pathname === "/api" || url.pathname.startsWith("/api/");
  if (isApi && site !== null && site !== "same-origin" && site !== "none") {
    return { status: 403, error: refused("The request comes from another page.") };
  }
  if (isApi && access.token !== null && !equalInConstantTime(request.headers.get(TOKEN_HEADER) ?? "", access.token)) {
    return {
      status: 401,
      error: refused("The page's key is not this run's: the program was started again. Open the address it printed last."),
    };
  }
  return null;
}

function refused(reason: string): TautlineError<"token-refused"> {
  return new TautlineError("token-refused", reason, { reason });
}
