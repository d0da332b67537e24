import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { openRadiusSheet } from "#renderer/desk/model/open-radius-sheet.ts";
import { ChoiceRow } from "#renderer/desk/side/choice-row.tsx";
import { mmText, treeName } from "#renderer/editor/session/words.ts";
import { polylineLength } from "#shared/geometry/polyline.ts";
import type { CrossLink, Strand } from "#shared/trees/document.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

const STRUT: readonly (readonly ["strut", string])[] = [["strut", "strut"]];
const DOUBT: readonly (readonly ["doubtful", string])[] = [["doubtful", "doubtful"]];

/** A strand: its measures and its labels. */
export function StrandFields({ model, strand }: { readonly model: DeskModel; readonly strand: Strand }) {
  const { editor } = model;
  const document = editor.document.value;
  const disabled = editor.readOnly;
  const measures = model.measures.value.strands.find((one) => one.id === strand.id);
  const curve = strand.curve === null ? undefined : document.curves.get(strand.curve);
  return (
    <>
      <h2>
        {measures?.trunk === true ? "trunk" : "strand"}{" "}
        <span class="soft">
          {strand.id} of {treeName(document, strand.tree)}
        </span>
      </h2>
      <dl class="facts figures">
        <dt>length</dt>
        <dd>{measures === undefined ? "not traced" : mmText(measures.length, 2)}</dd>
        <dt>mean diameter</dt>
        <dd>
          {measures?.meanRadius == null ? "below resolution or too short" : mmText(2 * measures.meanRadius, 2)}{" "}
          <button
            type="button"
            class="button plain"
            title="Set a radius by hand at the place chosen on the strip (Shift + W)"
            disabled={disabled || strand.curve === null}
            onClick={() => openRadiusSheet(model, null)}
          >
            set a radius
          </button>
        </dd>
        <dt>branch order</dt>
        <dd>{measures?.order ?? "not reached from the origin"}</dd>
        <dt>slack</dt>
        <dd>{measures?.slack == null ? "–" : `${(measures.slack * 100).toFixed(1)} %`}</dd>
        <dt>image fit</dt>
        <dd>{curve?.imageFit == null ? "not followed in the image" : curve.imageFit.toFixed(2)}</dd>
        <dt>pins between</dt>
        <dd>{strand.via.length}</dd>
      </dl>
      <ChoiceRow
        label="strut"
        options={STRUT}
        value={strand.strut === true ? "strut" : null}
        set={(value) =>
          editor.do({ do: "label", args: { strands: [strand.id], strand: { strut: value === "strut" ? true : null } } })
        }
        disabled={disabled}
      />
      <ChoiceRow
        label="certainty"
        options={DOUBT}
        value={strand.certainty === "doubtful" ? "doubtful" : null}
        set={(certainty) => editor.do({ do: "label", args: { strands: [strand.id], strand: { certainty } } })}
        disabled={disabled}
      />
    </>
  );
}

/** A cross-link: its length and its certainty. */
export function LinkFields({ model, link }: { readonly model: DeskModel; readonly link: CrossLink }) {
  const { editor } = model;
  const document = editor.document.value;
  const [from, to] = [link.from, link.to].map((id) => treeName(document, document.nodes.get(id)!.tree));
  return (
    <>
      <h2>
        cross-link <span class="soft">{link.id}</span>
      </h2>
      <dl class="facts figures">
        <dt>joins</dt>
        <dd>{from === to ? `two places of ${from}` : `${from} and ${to}`}</dd>
        <dt>length</dt>
        <dd>{mmText(polylineLength(polylineOf(document, link)), 2)}</dd>
      </dl>
      <ChoiceRow
        label="certainty"
        options={DOUBT}
        value={link.certainty === "doubtful" ? "doubtful" : null}
        set={(certainty) => editor.do({ do: "label", args: { crossLinks: [link.id], strand: { certainty } } })}
        disabled={editor.readOnly}
      />
    </>
  );
}
