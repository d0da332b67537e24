import type { Context } from "hono";
import type { RouteName } from "#shared/api/routes.ts";

/** Answers of some routes, by name. */
export type RouteHandlers = Partial<Record<RouteName, (context: Context) => Promise<Response>>>;
