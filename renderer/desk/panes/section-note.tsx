import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { countOf, mmText } from "#renderer/editor/session/words.ts";
import { adviceWords } from "#renderer/editor/tracing/guide-advice.ts";
import { partOfProposal } from "#shared/tracing/follow/part-of-proposal.ts";

/** More warnings than this at once are read by nobody. */
const MOST_ADVICE = 3;

/**
 * What to look at, over the section's corner: warnings along the guide, how far following has come, what is proposed. It lies
 * over the picture, so that nothing moves when it comes and goes.
 */
export function SectionNote({ model }: { readonly model: DeskModel }) {
  const { editor } = model;
  const advice = editor.beside.advice.value.slice(0, MOST_ADVICE);
  const isClosed = editor.beside.isClosed.value;
  return (
    <div class="section-advice" role="status">
      {isClosed ? <p>traced strings are impassable</p> : null}
      <ProposalWords model={model} />
      {advice.map((warning) => (
        <p key={`${warning.kind} ${warning.at.join(" ")}`} class="warn">
          {adviceWords(editor.document.value, warning)}
        </p>
      ))}
    </div>
  );
}

/** How far following has come, or what is proposed. */
function ProposalWords({ model }: { readonly model: DeskModel }) {
  const following = model.editor.proposing.following.value;
  switch (following.kind) {
    case "none":
      return null;
    case "growing":
      return <p>following the string: {mmText(following.lengthMm)} (Esc stops)</p>;
    case "ready": {
      const { proposal, leftOut } = following;
      const part = partOfProposal(proposal, leftOut);
      const doubtful = part.strands.filter((strand) => strand.doubtful.length > 0).length;
      return (
        <p class={doubtful > 0 ? "warn" : ""}>
          proposed: {countOf(part.strands.length, "strand")}, {mmText(part.lengthMm)}
          {doubtful > 0 ? `, ${doubtful} with doubtful stretches` : ""}
        </p>
      );
    }
  }
}
