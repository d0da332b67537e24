import { useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import { type LookedAtTrees, lookAtTrees } from "#renderer/desk/model/look-at-trees.ts";
import { nameOfChosenFile, passLabel } from "#renderer/study/side-by-side/sides.ts";
import type { PassSummary, SpecimenRecord } from "#shared/api/specimen.ts";

export interface SidesSheetProps {
  readonly specimen: SpecimenRecord;
  readonly passes: readonly PassSummary[];
  /** The two sides shown now; null = none yet. */
  readonly now: { readonly a: string; readonly b: string } | null;
  readonly show: (a: string, b: string) => void;
  readonly close: () => void;
}

const FILE = "file";

/** Chooses what is held against what: passes, or one pass and a tree file of the same specimen. */
export function SidesSheet({ specimen, passes, now, show, close }: SidesSheetProps) {
  const known = (id: string | undefined) => (passes.some((pass) => pass.id === id) ? id! : FILE);
  const [a, setA] = useState(known(now?.a ?? passes[0]?.id));
  const [b, setB] = useState(known(now?.b ?? passes[1]?.id));
  const [file, setFile] = useState<LookedAtTrees | null>(null);
  const [failure, setFailure] = useState<string | null>(null);
  const needsFile = a === FILE || b === FILE;
  const ready = a !== b && (!needsFile || (file !== null && file.scan !== "other"));

  const look = async (chosen: File | undefined) => {
    setFile(null);
    setFailure(null);
    if (chosen === undefined) return;
    try {
      setFile(lookAtTrees(new Uint8Array(await chosen.arrayBuffer()), chosen.name, specimen));
    } catch (error) {
      setFailure(error instanceof Error ? error.message : String(error));
    }
  };
  const go = () => {
    const name = file === null ? "" : nameOfChosenFile(file);
    show(a === FILE ? name : a, b === FILE ? name : b);
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="button" class="button main" disabled={!ready} onClick={go}>
        Compare
      </button>
    </>
  );
  return (
    <Sheet title={`Side by side: ${specimen.name}`} close={close} foot={foot} kind="small-sheet">
      <SideChoice label="A, the reference" value={a} passes={passes} set={setA} />
      <SideChoice label="B, held against it" value={b} passes={passes} set={setB} />
      {needsFile ? (
        <label class="stacked">
          <span>The tree file (.chordae.json)</span>
          <input
            class="field"
            type="file"
            accept=".json,application/json"
            onChange={(event) => void look(event.currentTarget.files?.[0])}
          />
        </label>
      ) : null}
      {a === b ? <p class="warn">Both sides are the same. Choose two.</p> : null}
      {failure === null ? null : (
        <p class="warn" role="alert">
          {failure}
        </p>
      )}
      {file === null || file.sentence === null ? null : (
        <p class={file.scan === "other" ? "warn" : "soft"} role={file.scan === "other" ? "alert" : "status"}>
          {file.sentence}
        </p>
      )}
    </Sheet>
  );
}

interface SideChoiceProps {
  readonly label: string;
  readonly value: string;
  readonly passes: readonly PassSummary[];
  readonly set: (id: string) => void;
}

function SideChoice({ label, value, passes, set }: SideChoiceProps) {
  return (
    <label class="stacked">
      <span>{label}</span>
      <select class="field" value={value} onChange={(event) => set(event.currentTarget.value)}>
        {passes.map((pass) => (
          <option key={pass.id} value={pass.id}>
            {passLabel(pass)}
          </option>
        ))}
        <option value={FILE}>a tree file</option>
      </select>
    </label>
  );
}
