import { Hono } from "hono";
import { type Access, refusedAccess } from "#main/http/access.ts";
import { bytesAnswer, errorAnswer } from "#main/http/answers.ts";
import { engineRoutes } from "#main/http/engine-routes.ts";
import { libraryRoutes } from "#main/http/library-routes.ts";
import { pagePath } from "#main/http/page-path.ts";
import type { Ports } from "#main/http/ports.ts";
import type { RouteHandlers } from "#main/http/route-handlers.ts";
import { studyRoutes } from "#main/http/study-routes.ts";
import { workRoutes } from "#main/http/work-routes.ts";
import { ROUTES, type RouteName } from "#shared/api/routes.ts";
import { isTautlineError, TautlineError } from "#shared/errors.ts";

export type Handler = (request: Request) => Promise<Response>;

export interface HandlerOptions {
  readonly access: Access;
  /** Called with every failure that is the program's own fault; expected ones are answers only. */
  readonly onFault: (error: unknown) => void;
}

/** The one request handler of both shells: page files by GET and HEAD, and the API. Never rejects. */
export function createHandler(ports: Ports, options: HandlerOptions): Handler {
  const app = new Hono();
  const handlers: RouteHandlers = {
    ...libraryRoutes(ports),
    ...engineRoutes(ports),
    ...workRoutes(ports),
    ...studyRoutes(ports),
  };
  for (const [name, route] of Object.entries(ROUTES)) {
    const handle = handlers[name as RouteName];
    if (!handle) throw new Error(`route ${name} has no handler`);
    app.on(route.method, route.path, handle);
  }
  app.get("*", (context) => {
    const { pathname } = new URL(context.req.url);
    return isApi(pathname) ? unknownRoute(pathname, context.req.method) : pageFile(ports, pathname);
  });
  app.notFound((context) => unknownRoute(new URL(context.req.url).pathname, context.req.method));
  app.onError((error) => {
    if (!isTautlineError(error) || error.tag === "internal") options.onFault(error);
    return errorAnswer(error);
  });
  return async (request) => {
    const refused = refusedAccess(request, options.access);
    if (refused) return errorAnswer(refused.error, refused.status);
    return app.fetch(request);
  };
}

function isApi(pathname: string): boolean {
  return pathname === "/api" || pathname.startsWith("/api/");
}

/** 405 with the allowed methods where the path exists under another method; else 404. */
function unknownRoute(pathname: string, method: string): Response {
  const allowed = new Set<string>();
  if (!isApi(pathname)) for (const name of ["GET", "HEAD"]) allowed.add(name);
  for (const route of Object.values(ROUTES)) {
    const pattern = new RegExp(`^${route.path.replace(/:[a-z]+/g, "[^/]+")}$`);
    if (!pattern.test(pathname)) continue;
    allowed.add(route.method);
    if (route.method === "GET") allowed.add("HEAD");
  }
  if (allowed.size > 0 && !allowed.has(method)) {
    const what = `${method} is not answered here`;
    const error = new TautlineError("bad-request", `${what}.`, { what, where: "method" });
    return errorAnswer(error, 405, { allow: [...allowed].join(", ") });
  }
  return errorAnswer(new TautlineError("not-found", "There is nothing at this address.", { what: "address", id: "" }));
}

async function pageFile(ports: Ports, pathname: string): Promise<Response> {
  const path = pagePath(pathname);
  const file = await ports.page.read(path);
  if (!file) throw new TautlineError("not-found", "The page has no such file.", { what: "page file", id: path });
  // Names under assets/ carry a hash of their content; everything else is asked for anew.
  const caching = path.startsWith("assets/") ? { "cache-control": "private, max-age=31536000, immutable" } : undefined;
  return bytesAnswer(new Uint8Array(file.bytes), file.type, caching);
}
