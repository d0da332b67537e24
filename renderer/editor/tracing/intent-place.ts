import type { Aim } from "#renderer/editor/tracing/snapper.ts";
import type { PointMm } from "#shared/geometry/types.ts";

/** A place already known, or one that the engine still has to snap. */
export type IntentPlace = { readonly point: PointMm } | { readonly aim: Aim };
