import type { OpenEnd } from "#shared/api/study.ts";

export interface OpenEndListProps {
  readonly ends: readonly OpenEnd[];
  /** Shows an end on the desk; null where there is no desk. */
  readonly show: ((end: OpenEnd) => void) | null;
}

/** Unfinished ends by their trees. */
export function OpenEndList({ ends, show }: OpenEndListProps) {
  return (
    <ul class="open-ends" aria-label="Open ends">
      {ends.map((end) => (
        <li key={`${end.tree} ${end.node}`}>
          {end.treeName}, node {end.node}
          {show === null ? null : (
            <button type="button" class="button plain" onClick={() => show(end)}>
              Go there
              <span class="unseen">
                : {end.treeName}, {end.node}
              </span>
            </button>
          )}
        </li>
      ))}
    </ul>
  );
}
