import { useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import { plural } from "#renderer/shelf/words.ts";
import type { ShelfSpecimen } from "#shared/api/specimen.ts";

export interface RemoveSheetProps {
  readonly shown: ShelfSpecimen;
  /** Removes; rejects with a sentence when that fails. */
  readonly remove: (force: boolean) => Promise<void>;
  readonly close: () => void;
}

/** Asks before a specimen goes. Passes with edits are named, and need the specimen's name typed: their work would be lost. */
export function RemoveSheet({ shown, remove, close }: RemoveSheetProps) {
  const { name } = shown.specimen;
  const edited = shown.passes.filter((pass) => pass.edits > 0);
  const [typed, setTyped] = useState("");
  const [busy, setBusy] = useState(false);
  const [failure, setFailure] = useState<string | null>(null);
  const free = edited.length === 0 || typed.trim() === name;
  const go = async () => {
    setBusy(true);
    try {
      await remove(edited.length > 0);
    } catch (error) {
      setFailure(error instanceof Error ? error.message : String(error));
      setBusy(false);
    }
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Keep it
      </button>
      <button type="submit" form="remove-form" class="button danger" disabled={!free || busy}>
        Remove for good
      </button>
    </>
  );
  return (
    <Sheet title={`Remove ${name}?`} close={close} foot={foot} kind="small-sheet">
      <form
        id="remove-form"
        class="shelf-remove"
        onSubmit={(event) => {
          event.preventDefault();
          if (free && !busy) void go();
        }}
      >
        <p>The library's copy of the scan is deleted. The file it was taken in from is not touched.</p>
        {edited.length === 0 ? null : (
          <>
            <p class="warn">
              {plural(edited.length, "pass", "passes")} with edits would be lost with it:{" "}
              {edited.map((pass) => `${pass.annotator}, pass ${pass.number} (${plural(pass.edits, "edit")})`).join("; ")}.
            </p>
            <label class="stacked">
              <span>Type the specimen's name, {name}, to remove it with its passes</span>
              <input class="field" value={typed} onInput={(event) => setTyped(event.currentTarget.value)} />
            </label>
          </>
        )}
        {failure === null ? null : (
          <p class="warn" role="alert">
            {failure}
          </p>
        )}
      </form>
    </Sheet>
  );
}
