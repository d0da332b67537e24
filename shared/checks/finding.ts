export type Severity = "error" | "warning" | "note";

export type StructureCode =
  | "no-root"
  | "not-connected"
  | "loop"
  | "open-end"
  | "no-points"
  | "two-strand-fork"
  | "short-spur"
  | "overlapping-strands"
  | "shared-stretch";

/** Where a finding is; absent parts are null. Position in millimetres. */
export interface FindingPlace {
  readonly position: readonly [number, number, number] | null;
  readonly node: string | null;
  readonly strand: string | null;
}

/** Something a check reports: a stable code, its weight, its place and a plain sentence. */
export interface Finding {
  readonly code: StructureCode;
  readonly severity: Severity;
  readonly tree: string;
  readonly at: FindingPlace;
  readonly message: string;
}

/** Weight of each finding unless a protocol says otherwise. */
export const DEFAULT_SEVERITY: Readonly<Record<StructureCode, Severity>> = {
  "no-root": "error",
  "not-connected": "error",
  loop: "error",
  "open-end": "error",
  "no-points": "warning",
  "two-strand-fork": "warning",
  "short-spur": "warning",
  "overlapping-strands": "warning",
  "shared-stretch": "warning",
};

/** Stable text for a finding, the same as long as it says the same of the same place; dismissals are kept under it. */
export function findingKey(finding: Finding): string {
  return [finding.code, finding.tree, finding.at.node ?? "", finding.at.strand ?? ""].join(" ");
}
