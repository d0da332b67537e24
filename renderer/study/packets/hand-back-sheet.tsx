import { useEffect, useState } from "preact/hooks";
import type { Services } from "#renderer/app/services.ts";
import { Sheet } from "#renderer/app/sheet.tsx";
import { plural } from "#renderer/shelf/words.ts";
import { PacketList } from "#renderer/study/packets/make-packets-sheet.tsx";
import { OpenEndList } from "#renderer/study/packets/open-end-list.tsx";
import { FolderField, keepLastFolder, lastFolder } from "#renderer/study/parts/folder-field.tsx";
import { JobLine } from "#renderer/study/parts/job-line.tsx";
import { useJob } from "#renderer/study/parts/use-job.ts";
import type { AssignmentView, PacketForm } from "#shared/api/study.ts";

export interface HandBackSheetProps {
  readonly services: Services;
  /** The assignment's specimen. */
  readonly specimen: string;
  readonly close: () => void;
}

/** Writes the pass of an assignment as a packet for the study lead; says first what is unfinished. */
export function HandBackSheet({ services, specimen, close }: HandBackSheetProps) {
  const { client, capabilities } = services;
  const [view, setView] = useState<AssignmentView | null>(null);
  const [failure, setFailure] = useState<string | null>(null);
  const [folder, setFolder] = useState(lastFolder());
  const [form, setForm] = useState<PacketForm>("zip");
  const [sign, setSign] = useState(true);
  const [anyway, setAnyway] = useState(false);
  const job = useJob(client);
  useEffect(() => {
    client.studies
      .assignment(specimen)
      .then(setView)
      .catch((error: unknown) => setFailure(error instanceof Error ? error.message : String(error)));
  }, [client, specimen]);
  const running = job.run.kind === "running";
  const make = () => {
    keepLastFolder(folder.trim());
    void job.start(() => client.studies.makeReturn(specimen, { folder: folder.trim(), form, sign }));
  };
  if (job.run.kind === "done") {
    const packets = job.run.result.packets ?? [];
    const foot = (
      <button type="button" class="button main" onClick={close}>
        Done
      </button>
    );
    return (
      <Sheet title="Handed back" close={close} foot={foot} kind="packet-sheet">
        <PacketList packets={packets} show={capabilities.shell === "electron" ? capabilities.showInFolder : null} />
        <p class="soft">
          Bring it to the study lead. The pass is sealed: to mend something in it, open it again on the shelf and hand it back
          once more.
        </p>
      </Sheet>
    );
  }
  const ends = view?.openEnds ?? [];
  const ready = view !== null && folder.trim() !== "" && (ends.length === 0 || anyway);
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="button" class="button main" disabled={!ready || running} onClick={make}>
        Hand it back
      </button>
    </>
  );
  return (
    <Sheet title={view === null ? "Hand it back" : `Hand ${view.code} back`} close={close} foot={foot} kind="packet-sheet">
      {failure === null ? null : (
        <p class="study-refusal" role="alert">
          {failure}
        </p>
      )}
      {view === null && failure === null ? <p class="soft">Reading the pass</p> : null}
      {ends.length === 0 ? (
        <p>
          The packet holds your trees, the log of every edit with its time, and nothing else. The pass is finished and sealed by
          it.
        </p>
      ) : (
        <>
          <div class="study-refusal" role="alert">
            <p>
              {plural(ends.length, "end")} in this pass {ends.length === 1 ? "is" : "are"} still open, which is unfinished work.
              The study lead's program refuses the packet because of that. Finish each: say how it ends, or take the strand away.
            </p>
            <OpenEndList ends={ends} show={null} />
          </div>
          <label class="scan-choice">
            <input type="checkbox" checked={anyway} onChange={(event) => setAnyway(event.currentTarget.checked)} />
            <span>The study lead has agreed to take it with open ends</span>
          </label>
        </>
      )}
      <FolderField label="Folder to write into" value={folder} set={setFolder} capabilities={capabilities} disabled={running} />
      <div class="study-fields">
        <label class="stacked">
          <span>Written as</span>
          <select class="field" value={form} onChange={(event) => setForm(event.currentTarget.value as PacketForm)}>
            <option value="zip">a zip file</option>
            <option value="folder">a folder</option>
          </select>
        </label>
      </div>
      <label class="scan-choice">
        <input type="checkbox" checked={sign} onChange={(event) => setSign(event.currentTarget.checked)} />
        <span>Sign it, so that the study lead can tell that it is from you (Ed25519)</span>
      </label>
      <JobLine job={job} label="Making the packet" />
    </Sheet>
  );
}
