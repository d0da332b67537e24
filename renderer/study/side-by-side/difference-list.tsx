import { useEffect, useRef } from "preact/hooks";
import { sideOfKind } from "#renderer/study/side-by-side/pair-scene.ts";
import type { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import { SideSwatch } from "#renderer/study/side-by-side/side-swatch.tsx";
import { DIFFERENCE_WORDS, differenceSentence, distanceWords, treeTitle } from "#shared/compare/comparison-words.ts";
import type { Difference, DifferenceGroup } from "#shared/compare/differences.ts";
import { DIFFERENCE_GLYPHS } from "#shared/marks/difference-glyph.ts";

/** The events of the edit script by tree pair, then the trees and cross-links that only one side has. */
export function DifferenceList({ model }: { readonly model: SideBySideModel }) {
  const comparison = model.comparison.value;
  const groups = model.groups.value;
  const all = model.differences.value;
  const current = model.current.value;
  const at = current === null ? -1 : all.indexOf(current);
  // The other tree of an exchange has the event in its partner's list.
  const others = new Set(all.map((difference) => difference.followedBy));
  const agreeing = comparison?.pairs.filter((pair) => pair.events.length === 0 && !others.has(pair.b)) ?? [];
  return (
    <section class="pane side-panel" aria-label="Differences">
      <header class="difference-head">
        <h2>
          {comparison === null ? "Differences" : `${all.length} difference${all.length === 1 ? "" : "s"}`}
          {at < 0 ? null : <span class="soft figures"> · {at + 1}</span>}
        </h2>
        <div class="row">
          <button
            type="button"
            class="button"
            title="Previous difference (Shift + Q)"
            disabled={all.length === 0}
            onClick={() => model.step(-1)}
          >
            previous
          </button>
          <button
            type="button"
            class="button"
            title="Next difference (Q)"
            disabled={all.length === 0}
            onClick={() => model.step(1)}
          >
            next
          </button>
        </div>
      </header>
      <p class="difference-key small">
        <SideSwatch side="a" /> A alone <SideSwatch side="b" /> B alone <SideSwatch side={null} /> both
      </p>
      <div class="side-body" tabIndex={0} aria-label="List of differences" role="group">
        {comparison?.warnings.map((warning) => (
          <p key={warning} class="difference-note">
            {warning}
          </p>
        ))}
        {groups.map((group) => (
          <section key={titleOf(model, group)} class="tree-group">
            <h3>
              {titleOf(model, group)}
              {group.pair === null ? null : <span class="figures group-distance">{distanceWords(group.pair)}</span>}
            </h3>
            <ul>
              {group.differences.map((difference) => (
                <Row key={difference.key} model={model} difference={difference} chosen={difference === current} />
              ))}
            </ul>
          </section>
        ))}
        {comparison === null ? (
          <p class="empty">The differences stand here as soon as both sets are compared.</p>
        ) : (
          <p class="empty">
            {agreeing.length === 0
              ? "No pair of trees is without a difference."
              : `Without a difference: ${agreeing.map((pair) => treeTitle(model.a.plain, pair.a)).join(", ")}.`}
          </p>
        )}
      </div>
    </section>
  );
}

interface RowProps {
  readonly model: SideBySideModel;
  readonly difference: Difference;
  readonly chosen: boolean;
}

function Row({ model, difference, chosen }: RowProps) {
  const row = useRef<HTMLButtonElement>(null);
  useEffect(() => {
    if (chosen) row.current?.scrollIntoView({ block: "nearest" });
  }, [chosen]);
  return (
    <li>
      <button
        ref={row}
        type="button"
        class="finding-row difference-row"
        aria-pressed={chosen}
        data-kind={difference.kind}
        onClick={() => model.goTo(difference)}
      >
        <DifferenceGlyph kind={difference.kind} />
        <span>
          <strong>{DIFFERENCE_WORDS[difference.kind]}</strong>
          <span class="difference-sentence">{differenceSentence(difference, model.a.plain, model.b.plain)}</span>
        </span>
      </button>
    </li>
  );
}

/** The glyph of a kind of difference on the dark ground that its colours are made for. */
function DifferenceGlyph({ kind }: { readonly kind: Difference["kind"] }) {
  const { fill, stroke } = DIFFERENCE_GLYPHS[kind];
  const side = sideOfKind(kind);
  return (
    <svg
      class={`difference-glyph on-picture ${side === null ? "" : `of-${side}`}`}
      width="26"
      height="26"
      viewBox="-13 -13 26 26"
      aria-hidden="true"
    >
      <path class="glyph-fill" d={fill} />
      <path class="glyph-stroke" d={stroke} />
    </svg>
  );
}

function titleOf({ a, b }: SideBySideModel, { of, pair }: DifferenceGroup): string {
  if (pair !== null) {
    const [titleA, titleB] = [treeTitle(a.plain, pair.a), treeTitle(b.plain, pair.b)];
    return titleA === titleB ? titleA : `${titleA} – ${titleB}`;
  }
  return of === "only-a" ? "Trees only in A" : of === "only-b" ? "Trees only in B" : "Cross-links of one side";
}
