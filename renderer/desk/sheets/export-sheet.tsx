import { useState } from "preact/hooks";
import { CAUTIONS } from "#renderer/app/about-sheet.tsx";
import { Sheet } from "#renderer/app/sheet.tsx";
import { exportFileName, exportTrees, lossesOf } from "#renderer/desk/model/export-trees.ts";
import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import type { ExportFormat } from "#shared/api/routes.ts";

const FORMATS: readonly { readonly format: ExportFormat; readonly title: string; readonly words: string }[] = [
  {
    format: "chordae",
    title: "Tree file (.chordae.json)",
    words: "Everything: trees, radii, pins, labels, landmarks.",
  },
  {
    format: "graphml",
    title: "GraphML",
    words: "Nodes, strands with their polylines, labels.",
  },
  {
    format: "vtp",
    title: "VTK PolyData (.vtp)",
    words: "Centrelines with a radius at each point.",
  },
  {
    format: "tables",
    title: "Tables (.csv, zipped)",
    words: "Nodes, strands and trees with their measures, units in the column names.",
  },
  {
    format: "labels",
    title: "Label volume (.nrrd)",
    words: "Tubes at the measured radii on the scan's own grid.",
  },
];

/** Writes the trees out; each format says what it loses, and what was lost is said again afterwards. */
export function ExportSheet({ model, close }: DeskSheetProps) {
  const [format, setFormat] = useState<ExportFormat>("chordae");
  const [busy, setBusy] = useState(false);
  const { services, editor } = model;
  const waiting = editor.waiting.value.length > 0 || editor.keeper.saved.value.kind !== "saved";
  const losses = lossesOf(model, format);
  const run = async () => {
    setBusy(true);
    try {
      const done = await exportTrees(model, format);
      if (done !== null) {
        services.notices.news(done.text, done.actions);
        close();
      }
    } catch (error) {
      services.notices.failed(error);
    } finally {
      setBusy(false);
    }
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="button" class="button main" disabled={busy} onClick={() => void run()}>
        {busy ? "Writing" : "Export"}
      </button>
    </>
  );
  return (
    <Sheet title="Export the trees" close={close} foot={foot}>
      <fieldset class="radio-list">
        <legend class="unseen">Format</legend>
        {FORMATS.map((entry) => (
          <label key={entry.format} class="radio-row">
            <input
              type="radio"
              name="format"
              value={entry.format}
              checked={format === entry.format}
              onChange={() => setFormat(entry.format)}
            />
            <span class="radio-words">
              <strong>{entry.title}</strong>
              <span class="soft">{entry.words}</span>
            </span>
          </label>
        ))}
      </fieldset>
      <section aria-live="polite" aria-label="What this format does not keep">
        {losses.length === 0 ? (
          <p>Nothing of these trees is lost in this format; the history of the pass stays in the library.</p>
        ) : (
          <>
            <p>Not kept by this format:</p>
            <ul class="cautions">
              {losses.map((sentence) => (
                <li key={sentence}>{sentence}</li>
              ))}
            </ul>
          </>
        )}
      </section>
      <p class="soft">
        File: <span class="figures">{exportFileName(model, format)}</span>
      </p>
      {waiting ? <p class="warn">Some edits are not saved yet. The export waits for them.</p> : null}
      <p class="soft small">{CAUTIONS.join(" ")}</p>
    </Sheet>
  );
}
