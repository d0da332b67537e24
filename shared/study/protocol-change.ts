import { sha256 } from "@noble/hashes/sha2.js";
import { bytesToHex } from "@noble/hashes/utils.js";
import type { ProtocolContent, ProtocolVersion } from "#shared/study/protocol.ts";

/** What a change of a protocol means for what was done under the version before. */
export type TouchedPart = "drawing" | "analysis" | "schedule";

export interface ProtocolTouch {
  readonly part: TouchedPart;
  /** Path of the key that differs, as `analysis.toleranceMm`. */
  readonly key: string;
  /** What follows from it, one sentence. */
  readonly sentence: string;
}

const SENTENCES: Readonly<Record<TouchedPart, string>> = {
  drawing: "passes drawn under the version before followed other rules and take no part in the analysis of this one",
  analysis: "passes stay valid; the numbers are made anew, and this was set after the version before, which the report says",
  schedule: "passes stay valid; only assignments that go out from now on are affected",
};

/** What `after` changes against `before` and what that touches, key by key; empty when they say the same. */
export function protocolTouches(before: ProtocolContent, after: ProtocolContent): ProtocolTouch[] {
  return (["drawing", "analysis", "schedule"] as const).flatMap((part) =>
    Object.keys({ ...before[part], ...after[part] })
      .filter((key) => canonicalJson(at(before[part], key)) !== canonicalJson(at(after[part], key)))
      .map((key) => ({ part, key: `${part}.${key}`, sentence: `${part}.${key} changes: ${SENTENCES[part]}.` })),
  );
}

/** True when passes drawn under one can stand beside passes drawn under the other. */
export function sameDrawing(a: ProtocolContent, b: ProtocolContent): boolean {
  return canonicalJson(a.drawing) === canonicalJson(b.drawing);
}

/** SHA-256 (hex) of a protocol: of the canonical JSON of {content, study, version}. */
export function protocolHash(study: string, { version, content }: Pick<ProtocolVersion, "version" | "content">): string {
  return bytesToHex(sha256(new TextEncoder().encode(canonicalJson({ content, study, version }))));
}

/** JSON without spaces, keys of every object in ascending order of their UTF-16 units: the same value gives the same text. */
export function canonicalJson(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map(canonicalJson).join(",")}]`;
  if (typeof value === "object" && value !== null) {
    const entries = Object.entries(value).filter(([, one]) => one !== undefined);
    entries.sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
    return `{${entries.map(([key, one]) => `${JSON.stringify(key)}:${canonicalJson(one)}`).join(",")}}`;
  }
  return JSON.stringify(value) ?? "null";
}

function at(part: object, key: string): unknown {
  return (part as Record<string, unknown>)[key];
}
