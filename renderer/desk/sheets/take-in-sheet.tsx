import { useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import { type LookedAtTrees, lookAtTrees } from "#renderer/desk/model/look-at-trees.ts";
import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import { countOf } from "#renderer/editor/session/words.ts";

/** Takes the trees of a file into this pass. Trees of another scan are asked about first. */
export function TakeInSheet({ model, close }: DeskSheetProps) {
  const [looked, setLooked] = useState<LookedAtTrees | null>(null);
  const [failure, setFailure] = useState<string | null>(null);
  const [anyway, setAnyway] = useState(false);

  const look = async (file: File | undefined) => {
    setLooked(null);
    setFailure(null);
    setAnyway(false);
    if (file === undefined) return;
    try {
      setLooked(lookAtTrees(new Uint8Array(await file.arrayBuffer()), file.name, model.specimen.value));
    } catch (error) {
      setFailure(error instanceof Error ? error.message : String(error));
    }
  };
  const ready = looked !== null && (looked.scan !== "other" || anyway);
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button
        type="button"
        class="button main"
        disabled={!ready}
        onClick={() => {
          close();
          model.editor.do({ do: "take-in", incoming: looked!.document, name: looked!.name });
        }}
      >
        Take in
      </button>
    </>
  );
  return (
    <Sheet title="Take in a tree file" close={close} foot={foot}>
      <label class="stacked">
        <span>A tree file (.chordae.json). Its trees are added to this pass as one edit; undo takes them out again.</span>
        <input
          class="field"
          type="file"
          accept=".json,application/json"
          onChange={(event) => void look(event.currentTarget.files?.[0])}
        />
      </label>
      {failure === null ? null : (
        <p class="warn" role="alert">
          {failure}
        </p>
      )}
      {looked === null ? null : (
        <div class="looked">
          <p>
            {looked.name}: {countOf(looked.document.trees.size, "tree")}, {countOf(looked.document.strands.size, "strand")},{" "}
            {countOf(looked.document.crossLinks.size, "cross-link")}.
          </p>
          {looked.sentence === null ? null : <p class={looked.scan === "other" ? "warn" : "soft"}>{looked.sentence}</p>}
          {looked.scan === "other" ? (
            <label class="check">
              <input type="checkbox" checked={anyway} onChange={(event) => setAnyway(event.currentTarget.checked)} />
              <span>Take them in all the same</span>
            </label>
          ) : null}
        </div>
      )}
    </Sheet>
  );
}
