import { useState } from "preact/hooks";
import { CAUTIONS } from "#renderer/app/about-sheet.tsx";
import { Sheet } from "#renderer/app/sheet.tsx";
import { type ComparisonFormat, comparisonFileName, exportComparison } from "#renderer/study/side-by-side/export-comparison.ts";
import type { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";

const FORMATS: readonly { readonly format: ComparisonFormat; readonly title: string; readonly words: string }[] = [
  {
    format: "html",
    title: "Report (.html)",
    words: "One page to read, print and pass on: numbers with what they mean, every difference, pictures.",
  },
  {
    format: "json",
    title: "Data (.json)",
    words: "Everything, as the command line's compare writes it: pairs, edit script, differences, overlap, distances.",
  },
];

/** Writes the comparison on screen out. */
export function ExportComparisonSheet({ model, close }: { readonly model: SideBySideModel; readonly close: () => void }) {
  const [format, setFormat] = useState<ComparisonFormat>("html");
  const [busy, setBusy] = useState(false);
  const comparison = model.comparison.value;
  const { notices } = model.services;
  const run = async () => {
    if (comparison === null) return;
    setBusy(true);
    try {
      const name = await exportComparison(model, comparison, format);
      notices.news(`${name} is in your downloads.`);
      close();
    } catch (error) {
      notices.failed(error);
    } finally {
      setBusy(false);
    }
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="button" class="button main" disabled={busy || comparison === null} onClick={() => void run()}>
        {busy ? "Writing" : "Export"}
      </button>
    </>
  );
  return (
    <Sheet title="Export the comparison" close={close} foot={foot}>
      <fieldset class="radio-list">
        <legend class="unseen">Format</legend>
        {FORMATS.map((entry) => (
          <label key={entry.format} class="radio-row">
            <input
              type="radio"
              name="comparison-format"
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
      <p class="soft">
        File: <span class="figures">{comparisonFileName(model, format)}</span>
      </p>
      {comparison === null ? <p class="warn">There is no comparison yet.</p> : null}
      <p class="soft small">{CAUTIONS.join(" ")}</p>
    </Sheet>
  );
}
