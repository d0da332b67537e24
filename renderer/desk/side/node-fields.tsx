import { useSignal } from "@preact/signals";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { ChoiceRow } from "#renderer/desk/side/choice-row.tsx";
import { OriginAxes, PlaceAxes } from "#renderer/desk/side/label-axes.tsx";
import { KIND_WORDS, mmText, treeName } from "#renderer/editor/session/words.ts";
import { END_KINDS, type EndKind, type TreeNode } from "#shared/trees/document.ts";
import type { NodeLabels } from "#shared/trees/edits/node-labels.ts";
import { carriesPlace, isLooseEnd } from "#shared/trees/edits/rewiring.ts";

const YES: readonly (readonly ["yes", string])[] = [["yes", "on a cleft"]];
const DOUBT: readonly (readonly ["doubtful", string])[] = [["doubtful", "doubtful"]];

/** A node: what it is, where, how far from the origin, its labels. */
export function NodeFields({ model, node }: { readonly model: DeskModel; readonly node: TreeNode }) {
  const { editor } = model;
  const document = editor.document.value;
  const downwards = useSignal(false);
  const disabled = editor.readOnly;
  const measures = model.measures.value.nodes.find((one) => one.id === node.id);
  const set = (labels: NodeLabels) => editor.labelNodes([node.id], labels, downwards.value);
  const [x, y, z] = node.position;
  return (
    <>
      <h2>
        {KIND_WORDS[node.kind]}{" "}
        <span class="soft">
          {node.id} of {treeName(document, node.tree)}
        </span>
      </h2>
      <dl class="facts figures">
        <dt>place</dt>
        <dd>
          {x.toFixed(2)}, {y.toFixed(2)}, {z.toFixed(2)} mm
        </dd>
        {measures?.pathLength == null || node.kind === "origin" ? null : (
          <>
            <dt>path length</dt>
            <dd>{mmText(measures.pathLength, 2)}</dd>
          </>
        )}
        {measures?.branchingAngle == null ? null : (
          <>
            <dt>branching angle</dt>
            <dd>{measures.branchingAngle.toFixed(0)}°</dd>
          </>
        )}
      </dl>
      {isLooseEnd(document, node) ? (
        <label class="inline-field">
          <span>ends as</span>
          <select
            class="field"
            value={node.kind}
            disabled={disabled}
            onChange={(event) =>
              editor.do({ do: "set-kind", args: { node: node.id, kind: event.currentTarget.value as EndKind } })
            }
          >
            {END_KINDS.map((kind) => (
              <option key={kind} value={kind}>
                {KIND_WORDS[kind]}
              </option>
            ))}
          </select>
        </label>
      ) : null}
      {node.kind === "origin" ? <OriginAxes values={node} set={set} disabled={disabled} /> : null}
      {carriesPlace(node.kind) ? (
        <>
          <PlaceAxes values={node} set={set} disabled={disabled} />
          <ChoiceRow
            label="cleft"
            options={YES}
            value={node.cleft === true ? "yes" : null}
            set={(value) => set({ cleft: value === "yes" ? true : null })}
            disabled={disabled}
          />
        </>
      ) : null}
      <ChoiceRow
        label="certainty"
        options={DOUBT}
        value={node.certainty === "doubtful" ? "doubtful" : null}
        set={(certainty) => editor.do({ do: "label", args: { nodes: [node.id], node: { certainty } } })}
        disabled={disabled}
      />
      {node.kind === "fork" || node.kind === "waypoint" ? (
        <label class="check">
          <input
            type="checkbox"
            checked={downwards.value}
            onChange={(event) => (downwards.value = event.currentTarget.checked)}
          />
          <span>set leaflet, segment and zone on all that hangs on it too</span>
        </label>
      ) : null}
    </>
  );
}
