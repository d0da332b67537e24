import { ERROR_HEADER, ROUTES, type RouteName, TOKEN_HEADER } from "#shared/api/routes.ts";
import { decodeError, TautlineError } from "#shared/errors.ts";

/** What one request carries besides its route. */
export interface Sending {
  readonly params?: Readonly<Record<string, string>>;
  readonly query?: Readonly<Record<string, string>>;
  readonly body?: unknown;
  /** A body that is a file's bytes; instead of `body`. */
  readonly bytes?: Blob;
  readonly signal?: AbortSignal;
  /** Lets the request outlive the page (for the farewell). */
  readonly keepalive?: boolean;
}

export type Fetch = (input: string, init: RequestInit) => Promise<Response>;

/** Thrown fields of a server that did not answer at all; told apart from errors the server sent. */
export const SERVER_AWAY = "server away";

/** True when the server could not be reached (as opposed to having answered with an error). */
export function isServerAway(error: unknown): boolean {
  return error instanceof TautlineError && error.tag === "internal" && (error.fields as { what: string }).what === SERVER_AWAY;
}

/** Path and query of a route. @throws RangeError when a path parameter is missing: a fault of the caller */
export function routeUrl(name: RouteName, sending: Sending): string {
  const path = ROUTES[name].path.replace(/:(\w+)/g, (_, key: string) => {
    const value = sending.params?.[key];
    if (value === undefined) throw new RangeError(`route ${name} needs the parameter ${key}`);
    return encodeURIComponent(value);
  });
  const query = new URLSearchParams(sending.query ?? {}).toString();
  return query === "" ? path : `${path}?${query}`;
}

/** The answer of one request. Every failure, of the server or on the way, is thrown as a {@link TautlineError}. */
export async function sendRequest(fetch: Fetch, token: string, name: RouteName, sending: Sending): Promise<Response> {
  const headers: Record<string, string> = { [TOKEN_HEADER]: token };
  const init: RequestInit = { method: ROUTES[name].method, headers };
  if (sending.body !== undefined) {
    headers["content-type"] = "application/json";
    init.body = JSON.stringify(sending.body);
  }
  if (sending.bytes !== undefined) {
    headers["content-type"] = "application/octet-stream";
    init.body = sending.bytes;
  }
  if (sending.signal) init.signal = sending.signal;
  if (sending.keepalive) init.keepalive = true;
  let answer: Response;
  try {
    answer = await fetch(routeUrl(name, sending), init);
  } catch (cause) {
    if (sending.signal?.aborted) throw new TautlineError("cancelled", "The request was stopped.", { what: name }, cause);
    throw new TautlineError(
      "internal",
      "The program behind this page does not answer. Edits are kept in this window and are sent when it is back.",
      { what: SERVER_AWAY },
      cause,
    );
  }
  if (!answer.ok || answer.headers.has(ERROR_HEADER)) throw decodeError(await answer.json().catch(() => null));
  return answer;
}
