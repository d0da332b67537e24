import { useState } from "preact/hooks";
import { TextField } from "#renderer/study/parts/fields.tsx";
import type { MethodFiles } from "#renderer/study/report/report-order.ts";
import { parseChordaeBytes } from "#shared/formats/chordae/read-chordae-file.ts";

export interface MethodChoiceProps {
  readonly method: MethodFiles | null;
  readonly set: (method: MethodFiles | null) => void;
  readonly annotators: readonly string[];
}

/** A computed method's tree files, if one is to be held against the annotators. */
export function MethodChoice({ method, set, annotators }: MethodChoiceProps) {
  const [failure, setFailure] = useState<string | null>(null);
  const take = async (chosen: readonly File[]) => {
    setFailure(null);
    try {
      const files = await Promise.all(
        chosen.map(async (file) => ({
          name: file.name,
          file: parseChordaeBytes(new Uint8Array(await file.arrayBuffer()), file.name),
        })),
      );
      if (files.length === 0) return;
      const named = files[0]!.file.annotator;
      const free = named !== undefined && !annotators.includes(named) ? named : "method";
      set({ name: method?.name ?? free, files, sameEngine: method?.sameEngine ?? false });
    } catch (error) {
      setFailure(error instanceof Error ? error.message : String(error));
    }
  };
  return (
    <details class="study-more">
      <summary>Hold a computed method against the annotators{method === null ? "" : `: ${method.name}`}</summary>
      <p class="soft">
        Its tree files, one for each specimen, each naming its scan. There is a verdict only with a margin that the protocol set
        beforehand, and on five specimens or more.
      </p>
      <label class="stacked method-files">
        <span>Tree files (.chordae.json)</span>
        <input
          class="field"
          type="file"
          multiple
          accept=".json,application/json"
          onChange={(event) => void take([...(event.currentTarget.files ?? [])])}
        />
      </label>
      {failure === null ? null : (
        <p class="study-refusal" role="alert">
          {failure}
        </p>
      )}
      {method === null ? null : (
        <>
          <TextField label="Called in the report" value={method.name} set={(name) => set({ ...method, name })} />
          {annotators.includes(method.name.trim()) || method.name.trim() === "" ? (
            <p class="warn">It needs a name that no annotator has.</p>
          ) : null}
          <label class="scan-choice">
            <input
              type="checkbox"
              checked={method.sameEngine}
              onChange={(event) => set({ ...method, sameEngine: event.currentTarget.checked })}
            />
            <span>It uses the engine that the annotators traced with, which draws both nearer together; the report says so</span>
          </label>
          <button type="button" class="button" onClick={() => set(null)}>
            Without a method
          </button>
        </>
      )}
    </details>
  );
}
