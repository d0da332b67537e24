import "#renderer/shelf/add-scan/add-scan.css";
import { useEffect, useRef, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import type { Client } from "#renderer/client/client.ts";
import { ConfirmForm } from "#renderer/shelf/add-scan/confirm-form.tsx";
import { type LookClient, LookThrough } from "#renderer/shelf/add-scan/look-through.ts";
import { draftOf, intakeOf, readingOf, type ScanDraft } from "#renderer/shelf/add-scan/scan-draft.ts";
import { ScanLook } from "#renderer/shelf/add-scan/scan-look.tsx";
import type { Capabilities } from "#shared/api/capabilities.ts";
import type { ReadingChoice } from "#shared/api/projections.ts";
import type { ScanLookAnswer } from "#shared/api/routes.ts";

export interface AddScanSheetProps {
  readonly client: Pick<Client, "lookAtScan" | "startIntake"> & LookClient;
  readonly capabilities: Pick<Capabilities, "pickScan">;
  /** Where the scan lies, when it was dropped; empty = the person says it here. */
  readonly path: string;
  readonly close: () => void;
  /** The intake has begun as this job. */
  readonly begun: (job: string) => void;
}

const FORM = "add-scan-form";

/** Adding a scan: which file, then what it holds and what a person confirms about it. */
export function AddScanSheet({ client, capabilities, path: given, close, begun }: AddScanSheetProps) {
  const [path, setPath] = useState(given);
  const [looking, setLooking] = useState(false);
  const [failure, setFailure] = useState<string | null>(null);
  const [look, setLook] = useState<{ readonly path: string; readonly answer: ScanLookAnswer } | null>(null);
  const [draft, setDraft] = useState<ScanDraft | null>(null);
  const [missing, setMissing] = useState<readonly string[]>([]);
  const [sending, setSending] = useState(false);
  // Answers of a file that the person has meanwhile left are dropped.
  const asked = useRef("");
  const [through] = useState(() => new LookThrough(client));
  useEffect(() => () => through.close(), [through]);

  const lookAt = async (wanted: string) => {
    const file = wanted.trim().replace(/^"(.*)"$/, "$1");
    if (file === "") return;
    asked.current = file;
    setPath(file);
    setLooking(true);
    setFailure(null);
    try {
      const answer = await client.lookAtScan({ path: file });
      if (asked.current !== file) return;
      setLook({ path: file, answer });
      setDraft(draftOf(answer.info, answer.suggestedPolarity));
      setMissing([]);
      through.forget();
    } catch (error) {
      if (asked.current === file) setFailure(error instanceof Error ? error.message : String(error));
    } finally {
      if (asked.current === file) setLooking(false);
    }
  };
  // A dropped file is looked at once, when the sheet opens.
  useEffect(() => void lookAt(given), []);

  /** Another channel or time point of the same file: the pictures change, what was filled in stays. */
  const lookAtReading = async (reading: ReadingChoice) => {
    if (look === null) return;
    through.forget();
    try {
      const answer = await client.lookAtScan({ path: look.path, ...reading });
      setLook((now) => (now?.path === look.path ? { ...now, answer } : now));
    } catch (error) {
      setMissing([error instanceof Error ? error.message : String(error)]);
    }
  };
  const beginLook = (from: ScanDraft | null = draft) => {
    if (look === null || from === null) return;
    void through.begin({ path: look.path, polarity: from.polarity, ...readingOf(from) });
  };
  const changeDraft = (change: Partial<ScanDraft>) => {
    if (draft === null) return;
    const next = { ...draft, ...change };
    setDraft(next);
    if (change.channel !== undefined || change.time !== undefined) void lookAtReading(readingOf(next));
    else if (change.polarity !== undefined && change.polarity !== draft.polarity) through.forget();
    // Only a box needs the pictures; they are made when it is asked for.
    if (next.part.isBox && through.shown.peek().state === "none") beginLook(next);
  };
  const choose = async () => {
    const chosen = await capabilities.pickScan();
    if (chosen !== null) await lookAt(chosen);
  };
  const takeIn = async () => {
    if (look === null || draft === null || sending) return;
    const order = intakeOf(look.path, look.answer.info, draft, look.answer.readings);
    if ("missing" in order) {
      setMissing(order.missing);
      return;
    }
    setSending(true);
    setMissing([]);
    try {
      const { job } = await client.startIntake(order.request);
      begun(job);
    } catch (error) {
      setMissing([error instanceof Error ? error.message : String(error)]);
      setSending(false);
    }
  };

  if (look === null || draft === null) {
    const foot = (
      <>
        <button type="button" class="button" onClick={close}>
          Cancel
        </button>
        <button type="submit" form={FORM} class="button main" disabled={path.trim() === "" || looking}>
          Look at it
        </button>
      </>
    );
    return (
      <Sheet title="Add a scan" close={close} foot={foot} kind="scan-path-sheet">
        <form
          id={FORM}
          class="scan-path"
          onSubmit={(event) => {
            event.preventDefault();
            void lookAt(path);
          }}
        >
          <p>
            NRRD, MetaImage, NIfTI-1, multi-page TIFF, OME-Zarr, a DICOM series, a folder of TIFF, PNG or BMP slices, or raw
            voxels with a sidecar. The source is only read, never changed.
          </p>
          <label class="stacked">
            <span>Path of the file or folder</span>
            <input
              class="field figures"
              value={path}
              spellcheck={false}
              autocomplete="off"
              onInput={(event) => setPath(event.currentTarget.value)}
            />
          </label>
          <button type="button" class="button" onClick={() => void choose()}>
            Choose …
          </button>
          <p aria-live="polite">{looking ? "Reading the header and a sample of the voxels …" : ""}</p>
          {failure === null ? null : (
            <p class="warn" role="alert">
              {failure}
            </p>
          )}
        </form>
      </Sheet>
    );
  }

  const foot = (
    <>
      <div class="scan-missing" aria-live="polite">
        {missing.map((sentence) => (
          <p key={sentence} class="warn">
            {sentence}
          </p>
        ))}
      </div>
      <button
        type="button"
        class="button"
        onClick={() => {
          through.forget();
          setLook(null);
          setDraft(null);
        }}
      >
        Another file
      </button>
      <button type="submit" form={FORM} class="button main" disabled={sending}>
        Take it in
      </button>
    </>
  );
  return (
    <Sheet title="Add a scan: check and confirm" close={close} foot={foot} kind="scan-sheet">
      <div class="scan-confirm">
        <ScanLook look={look.answer} handedness={draft.handedness} />
        <ConfirmForm
          id={FORM}
          look={look.answer}
          draft={draft}
          change={changeDraft}
          submit={() => void takeIn()}
          through={through.shown.value}
          beginLook={() => beginLook()}
          stopLook={() => through.stop()}
        />
      </div>
    </Sheet>
  );
}
