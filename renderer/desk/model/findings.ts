import { type Finding, findingKey } from "#shared/checks/finding.ts";
import { structureFindings } from "#shared/checks/structure.ts";
import type { TreeDocument } from "#shared/trees/document.ts";
import { plainFromDocument } from "#shared/trees/plain-from-document.ts";

export interface ShownFinding extends Finding {
  readonly key: string;
  /** Why it was set aside; null = it still stands. */
  readonly dismissed: string | null;
}

const ORDER = { error: 0, warning: 1, note: 2 } as const;

/** Findings of a document, the gravest first, those set aside last. */
export function shownFindings(document: TreeDocument): ShownFinding[] {
  return structureFindings(plainFromDocument(document))
    .map((finding) => {
      const key = findingKey(finding);
      return { ...finding, key, dismissed: document.dismissals.get(key)?.reason ?? null };
    })
    .sort((a, b) => Number(a.dismissed !== null) - Number(b.dismissed !== null) || ORDER[a.severity] - ORDER[b.severity]);
}
