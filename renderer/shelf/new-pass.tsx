import { useEffect, useRef, useState } from "preact/hooks";

export interface NewPassProps {
  readonly specimen: string;
  /** Names that made passes on this specimen before, most recent first. */
  readonly known: readonly string[];
  /** Rejects with a sentence when the pass cannot be made. */
  readonly create: (annotator: string) => Promise<void>;
  readonly close: () => void;
}

const LONGEST_NAME = 60;

/** Asks who traces; the name stands in every file the pass is written to. */
export function NewPass({ specimen, known, create, close }: NewPassProps) {
  const [name, setName] = useState(known[0] ?? "");
  const [busy, setBusy] = useState(false);
  const [failure, setFailure] = useState<string | null>(null);
  const field = useRef<HTMLInputElement>(null);
  useEffect(() => field.current?.select(), []);
  const good = name.trim() !== "";
  const start = async () => {
    if (!good || busy) return;
    setBusy(true);
    setFailure(null);
    try {
      await create(name.trim());
    } catch (error) {
      setFailure(error instanceof Error ? error.message : String(error));
      setBusy(false);
    }
  };
  const id = `annotators-${specimen}`;
  return (
    <form
      class="shelf-new-pass"
      onSubmit={(event) => {
        event.preventDefault();
        void start();
      }}
      onKeyDown={(event) => {
        if (event.key !== "Escape") return;
        event.stopPropagation();
        close();
      }}
    >
      <label>
        <span>Annotator</span>
        <input
          ref={field}
          class="field"
          list={id}
          maxLength={LONGEST_NAME}
          value={name}
          placeholder="for example AN-1"
          onInput={(event) => setName(event.currentTarget.value)}
        />
      </label>
      <datalist id={id}>
        {known.map((annotator) => (
          <option key={annotator} value={annotator} />
        ))}
      </datalist>
      <button type="submit" class="button main" disabled={!good || busy}>
        Start the pass
      </button>
      <button type="button" class="button plain" onClick={close}>
        Cancel
      </button>
      {failure === null ? null : (
        <p class="warn shelf-new-pass-failure" role="alert">
          {failure}
        </p>
      )}
    </form>
  );
}
