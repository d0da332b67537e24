import { useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import { bytesWords, plural } from "#renderer/shelf/words.ts";
import { canGoWith, keptChoice } from "#renderer/study/packets/choose-assignments.ts";
import { FolderField, keepLastFolder, lastFolder } from "#renderer/study/parts/folder-field.tsx";
import { JobLine } from "#renderer/study/parts/job-line.tsx";
import { useJob } from "#renderer/study/parts/use-job.ts";
import type { StudyModel } from "#renderer/study/study-model.ts";
import type { AssignmentCell, MadePacket, PacketForm, PacketRequest, StudyView } from "#shared/api/study.ts";

export interface MakePacketsSheetProps {
  readonly model: StudyModel;
  readonly view: StudyView;
  /** Assignments ticked at first. */
  readonly chosen: readonly string[];
  readonly close: () => void;
}

/** Writes assignments as packets, to be carried to the annotators. */
export function MakePacketsSheet({ model, view, chosen: first, close }: MakePacketsSheetProps) {
  const { client, capabilities } = model.services;
  const [chosen, setChosen] = useState<ReadonlySet<string>>(() => keptChoice(view, new Set(first)));
  const [folder, setFolder] = useState(lastFolder());
  const [form, setForm] = useState<PacketForm>("zip");
  const [scan, setScan] = useState<PacketRequest["scan"]>("within");
  const [sign, setSign] = useState(true);
  const [waive, setWaive] = useState(false);
  const job = useJob(client);
  const open = view.assignments.filter(({ state }) => state !== "returned");
  const order = [...open].sort((a, b) => (a.annotator === b.annotator ? a.place - b.place : a.annotator < b.annotator ? -1 : 1));
  const waiting = open.filter(({ id, waivable }) => chosen.has(id) && waivable);
  const ready = chosen.size > 0 && folder.trim() !== "" && (waiting.length === 0 || waive);
  const running = job.run.kind === "running";
  const toggle = (id: string) => {
    const next = new Set(chosen);
    if (!next.delete(id)) next.add(id);
    setChosen(keptChoice(view, next));
    job.reset();
  };
  const make = () => {
    keepLastFolder(folder.trim());
    const assignments = open.flatMap(({ id }) => (chosen.has(id) ? [id] : []));
    const request = { assignments, folder: folder.trim(), form, scan, sign };
    void job.start(() => client.studies.makePackets(model.id, waive ? { ...request, waiveWashout: true } : request));
  };
  if (job.run.kind === "done") return <Made packets={job.run.result.packets ?? []} model={model} close={close} />;
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="button" class="button main" disabled={!ready || running} onClick={make}>
        Make {plural(chosen.size, "packet")}
      </button>
    </>
  );
  return (
    <Sheet title="Make packets" close={close} foot={foot} kind="packet-sheet">
      <p class="soft">
        A packet holds the scan under its code, turned for this assignment, and the rules to draw by. It holds no name, no other
        pass and no original position.
      </p>
      <fieldset class="study-fieldset">
        <legend>Assignments</legend>
        <div class="tick-list">
          {order.map((cell) => (
            <Tick
              key={cell.id}
              model={model}
              cell={cell}
              ticked={chosen.has(cell.id)}
              barred={!canGoWith(view, cell, chosen)}
              toggle={() => toggle(cell.id)}
            />
          ))}
          {open.length === 0 ? <p class="soft">Every pass is back: nothing is left to send.</p> : null}
        </div>
      </fieldset>
      {waiting.length === 0 ? null : (
        <label class="scan-choice">
          <input type="checkbox" checked={waive} onChange={(event) => setWaive(event.currentTarget.checked)} />
          <span>
            Send although the protocol's days between repeats have not passed ({plural(waiting.length, "assignment")}). The study
            notes it, and so does the report.
          </span>
        </label>
      )}
      <FolderField label="Folder to write into" value={folder} set={setFolder} capabilities={capabilities} disabled={running} />
      <div class="study-fields">
        <label class="stacked">
          <span>Written as</span>
          <select class="field" value={form} onChange={(event) => setForm(event.currentTarget.value as PacketForm)}>
            <option value="zip">a zip file each</option>
            <option value="folder">a folder each</option>
          </select>
        </label>
        <label class="stacked">
          <span>The scan</span>
          <select class="field" value={scan} onChange={(event) => setScan(event.currentTarget.value as PacketRequest["scan"])}>
            <option value="within">in the packet</option>
            <option value="apart">in a packet of its own</option>
            <option value="without">left out: the annotator has it</option>
          </select>
        </label>
      </div>
      <label class="scan-choice">
        <input type="checkbox" checked={sign} onChange={(event) => setSign(event.currentTarget.checked)} />
        <span>Sign them, so that the annotator can tell that they are from you (Ed25519)</span>
      </label>
      <JobLine job={job} label="Making packets" />
    </Sheet>
  );
}

function Tick({
  model,
  cell,
  ticked,
  barred,
  toggle,
}: {
  readonly model: StudyModel;
  readonly cell: AssignmentCell;
  readonly ticked: boolean;
  readonly barred: boolean;
  readonly toggle: () => void;
}) {
  return (
    <label class="scan-choice">
      <input type="checkbox" checked={ticked} disabled={barred} onChange={toggle} />
      <span>
        {model.nameOf(cell)}
        {cell.training ? ", training" : ""} <span class="soft figures">{cell.code}</span>
        {cell.state === "out" ? <span class="soft"> (is out already; made again)</span> : null}
        {cell.why === null || ticked ? null : <span class="soft"> · {cell.why}</span>}
      </span>
    </label>
  );
}

function Made({
  packets,
  model,
  close,
}: {
  readonly packets: readonly MadePacket[];
  readonly model: StudyModel;
  readonly close: () => void;
}) {
  const { capabilities } = model.services;
  const foot = (
    <button type="button" class="button main" onClick={close}>
      Done
    </button>
  );
  return (
    <Sheet title={`${plural(packets.length, "packet")} written`} close={close} foot={foot} kind="packet-sheet">
      <PacketList packets={packets} show={capabilities.shell === "electron" ? capabilities.showInFolder : null} />
      <p class="soft">Carry each to its annotator, who takes it in on their shelf. Checksums are verified there.</p>
    </Sheet>
  );
}

/** Packets that were written, with where they lie. @param show opens a packet's folder; null where the shell cannot */
export function PacketList({
  packets,
  show,
}: {
  readonly packets: readonly MadePacket[];
  readonly show: ((path: string) => Promise<void>) | null;
}) {
  return (
    <ul class="packet-list" aria-label="Packets written">
      {packets.map(({ path, code, kind, bytes }) => (
        <li key={path}>
          <p>
            <strong class="figures">{code}</strong> {kind === "scan" ? "scan" : kind}{" "}
            <span class="soft">{bytesWords(bytes)}</span>
          </p>
          <p class="figures packet-path">{path}</p>
          {show === null ? null : (
            <button type="button" class="button" onClick={() => void show(path)}>
              Show it in its folder
            </button>
          )}
        </li>
      ))}
    </ul>
  );
}
