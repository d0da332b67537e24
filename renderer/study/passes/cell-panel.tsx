import { useState } from "preact/hooks";
import { dateWords, plural, workWords } from "#renderer/shelf/words.ts";
import { TextField } from "#renderer/study/parts/fields.tsx";
import type { StudyModel } from "#renderer/study/study-model.ts";
import type { AssignmentCell, StudyView } from "#shared/api/study.ts";
import type { ReturnedPass } from "#shared/study/study-record.ts";

export interface CellPanelProps {
  readonly model: StudyModel;
  readonly view: StudyView;
  readonly cell: AssignmentCell | null;
  readonly makePacket: (assignment: string) => void;
  readonly takeIn: () => void;
}

/** Everything about one assignment, and what a lead can do with it. */
export function CellPanel({ model, view, cell, makePacket, takeIn }: CellPanelProps) {
  if (cell === null) {
    return (
      <section class="pane cell-panel" aria-label="The chosen pass">
        <p class="soft">
          {view.assignments.length === 0
            ? "Codes, order and turns are drawn when the protocol is frozen. Then each cell is a pass that goes out as a packet."
            : "Choose a cell to see its code, its packet and what came back."}
        </p>
      </section>
    );
  }
  return (
    <section class="pane cell-panel" aria-label="The chosen pass" aria-live="polite">
      <h2>{model.nameOf(cell)}</h2>
      <dl class="facts">
        <dt>Code</dt>
        <dd class="figures">{cell.code}</dd>
        <dt>Order</dt>
        <dd>
          {cell.place} of {view.assignments.filter(({ annotator }) => annotator === cell.annotator).length} for {cell.annotator}
        </dd>
        {cell.out === null ? null : (
          <>
            <dt>Packet made</dt>
            <dd>
              {dateWords(cell.out.at)}, protocol {cell.out.protocolVersion}
            </dd>
          </>
        )}
        {cell.returned === null ? null : <Returned pass={cell.returned} />}
      </dl>
      <p class="soft">
        The annotator sees the code alone: no name of the specimen, no other pass, and the valve may be shown turned.
      </p>
      {cell.why === null || cell.state !== "planned" ? null : <p class="warn">{cell.why}</p>}
      {cell.counts === null || cell.counts.yes || cell.counts.reason === null ? null : (
        <p class={cell.training ? "soft" : "warn"}>{cell.counts.reason}</p>
      )}
      {cell.setAside.map((one) => (
        <p key={one.pass} class="soft">
          A pass was set aside on {dateWords(one.setAsideAt)}: {one.reason} It stays in the library.
        </p>
      ))}
      <div class="cell-actions">
        {cell.state === "returned" ? (
          <ReturnedActions model={model} cell={cell} />
        ) : (
          <>
            <button
              type="button"
              class={cell.state === "planned" ? "button main" : "button"}
              disabled={cell.why !== null && !cell.waivable}
              onClick={() => makePacket(cell.id)}
            >
              {cell.state === "planned" ? "Make its packet …" : "Make its packet again …"}
            </button>
            {cell.state === "out" ? (
              <button type="button" class="button main" onClick={takeIn}>
                Take in its return …
              </button>
            ) : null}
          </>
        )}
      </div>
    </section>
  );
}

function Returned({ pass }: { readonly pass: ReturnedPass }) {
  return (
    <>
      <dt>Taken in</dt>
      <dd>{dateWords(pass.at)}</dd>
      <dt>Holds</dt>
      <dd>
        {plural(pass.trees, "tree")}, {plural(pass.openEnds, "open end")}, {plural(pass.doubts, "doubt")}
      </dd>
      <dt>Work</dt>
      <dd>
        {workWords(pass.effort.workMs)}, {plural(pass.effort.edits, "edit")}, {plural(pass.effort.undos, "undo")}
      </dd>
      {pass.drawn === null ? null : (
        <>
          <dt>Drawn</dt>
          <dd>
            {dateWords(pass.drawn.from)} to {dateWords(pass.drawn.to)}, by the annotator's clock
          </dd>
        </>
      )}
      <dt>Signature</dt>
      <dd class="figures fingerprint">{pass.fingerprint ?? "not signed"}</dd>
    </>
  );
}

function ReturnedActions({ model, cell }: { readonly model: StudyModel; readonly cell: AssignmentCell }) {
  const [asking, setAsking] = useState(false);
  const [reason, setReason] = useState("");
  const [failure, setFailure] = useState<string | null>(null);
  const { services, id } = model;
  const setAside = async () => {
    const why = await model.change(() => services.client.studies.setAside(id, cell.id, reason.trim()));
    setFailure(why);
    if (why === null) setAsking(false);
  };
  const { returned } = cell;
  if (returned === null) return null;
  if (!asking) {
    return (
      <>
        <button
          type="button"
          class="button"
          onClick={() => services.goTo({ screen: "desk", specimen: cell.specimen, pass: returned.pass })}
        >
          Look at it on the desk
        </button>
        <button type="button" class="button plain" onClick={() => setAsking(true)}>
          Set it aside …
        </button>
      </>
    );
  }
  return (
    <form
      class="set-aside"
      onSubmit={(event) => {
        event.preventDefault();
        if (reason.trim() !== "") void setAside();
      }}
    >
      <p>
        A pass that is set aside stays in the library and takes no part in the analysis. The annotator's next return for this code
        can then be taken in. The reason stands in the report.
      </p>
      <TextField label="Why is it set aside?" value={reason} set={setReason} wide />
      {failure === null ? null : (
        <p class="study-refusal" role="alert">
          {failure}
        </p>
      )}
      <div class="row">
        <button type="submit" class="button danger" disabled={reason.trim() === "" || model.busy.value}>
          Set it aside
        </button>
        <button type="button" class="button plain" onClick={() => setAsking(false)}>
          Leave it in
        </button>
      </div>
    </form>
  );
}
