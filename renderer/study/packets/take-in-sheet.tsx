import { useRef, useState } from "preact/hooks";
import type { Services } from "#renderer/app/services.ts";
import { Sheet } from "#renderer/app/sheet.tsx";
import { bytesWords, plural } from "#renderer/shelf/words.ts";
import { JobLine } from "#renderer/study/parts/job-line.tsx";
import { useJob } from "#renderer/study/parts/use-job.ts";
import type { PacketKind, PacketLook, TakenPacket } from "#shared/api/study.ts";

export interface TakeInSheetProps {
  readonly services: Services;
  readonly close: () => void;
  /** Where the packet lies, when it was dropped; left out, the person says it here. */
  readonly path?: string;
}

const KINDS: Readonly<Record<PacketKind, string>> = {
  assignment: "an assignment",
  scan: "the scan of an assignment",
  return: "a returned pass",
};

/** Taking in a packet: which one, what it says it is, then the check of every byte and what came of it. */
export function TakeInSheet({ services, close, path: given = "" }: TakeInSheetProps) {
  const { client, capabilities } = services;
  const [path, setPath] = useState(given);
  const [look, setLook] = useState<{ readonly path: string; readonly found: PacketLook } | null>(null);
  const [looking, setLooking] = useState(false);
  const [failure, setFailure] = useState<string | null>(null);
  const [allowOpen, setAllowOpen] = useState(false);
  const job = useJob(client);
  // Answers about a packet that the person has meanwhile left are dropped.
  const asked = useRef("");

  const lookAt = async (typed: string) => {
    const wanted = typed.trim().replace(/^"(.*)"$/, "$1");
    if (wanted === "") return;
    asked.current = wanted;
    setPath(wanted);
    setLook(null);
    setFailure(null);
    setLooking(true);
    job.reset();
    try {
      const found = await client.studies.look(wanted);
      if (asked.current === wanted) setLook({ path: wanted, found });
    } catch (error) {
      if (asked.current === wanted) setFailure(error instanceof Error ? error.message : String(error));
    } finally {
      if (asked.current === wanted) setLooking(false);
    }
  };
  const choose = async (pick: () => Promise<string | null>) => {
    const chosen = await pick();
    if (chosen !== null) await lookAt(chosen);
  };
  const takeIn = () => {
    if (look === null) return;
    const request = allowOpen ? { path: look.path, allowOpenEnds: true } : { path: look.path };
    void job.start(() => client.studies.takeIn(request));
  };

  if (job.run.kind === "done" && job.run.result.taken !== undefined) {
    return <Taken taken={job.run.result.taken} services={services} close={close} />;
  }
  const running = job.run.kind === "running";
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        {running ? "Close; it goes on" : "Cancel"}
      </button>
      {look === null ? (
        <button type="submit" form="packet-form" class="button main" disabled={path.trim() === "" || looking}>
          {looking ? "Looking" : "Look at it"}
        </button>
      ) : (
        <button type="button" class="button main" disabled={running || look.found.refusal !== null} onClick={takeIn}>
          {running ? "Verifying" : "Verify and take it in"}
        </button>
      )}
    </>
  );
  return (
    <Sheet title="Take in a packet" close={close} foot={foot} kind="packet-sheet">
      <form
        id="packet-form"
        class="path-field"
        onSubmit={(event) => {
          event.preventDefault();
          void lookAt(path);
        }}
      >
        <label class="stacked">
          <span>Path of the packet: its zip file or its folder</span>
          <input
            class="field figures"
            value={path}
            spellcheck={false}
            disabled={running}
            onInput={(event) => {
              setPath(event.currentTarget.value);
              setLook(null);
              setFailure(null);
              job.reset();
            }}
          />
        </label>
        <button type="button" class="button" disabled={running} onClick={() => void choose(() => capabilities.pickPacket())}>
          {capabilities.shell === "electron" ? "Choose a zip file" : "Choose a packet"}
        </button>
        {capabilities.shell === "electron" ? (
          <button type="button" class="button" disabled={running} onClick={() => void choose(() => capabilities.pickFolder())}>
            Choose a folder
          </button>
        ) : null}
      </form>
      {failure === null ? null : (
        <p class="study-refusal" role="alert">
          {failure}
        </p>
      )}
      {look === null ? (
        <p class="soft">
          An assignment that a study lead sent, or a pass that an annotator sent back. Everything in it is verified against its
          checksums first; nothing in the library is ever overwritten.
        </p>
      ) : (
        <LookedAt found={look.found} allowOpen={allowOpen} setAllowOpen={setAllowOpen} disabled={running} />
      )}
      <JobLine job={job} label="Verifying and taking in" />
      {job.run.kind === "failed" ? <p class="soft">Nothing was taken in; the library is as it was before.</p> : null}
    </Sheet>
  );
}

interface LookedAtProps {
  readonly found: PacketLook;
  readonly allowOpen: boolean;
  readonly setAllowOpen: (allow: boolean) => void;
  readonly disabled: boolean;
}

function LookedAt({ found, allowOpen, setAllowOpen, disabled }: LookedAtProps) {
  return (
    <div class="packet-look" aria-live="polite">
      <p>
        This is <strong>{KINDS[found.kind]}</strong>, code <strong class="figures">{found.code}</strong>. {found.meaning}
      </p>
      <dl class="facts">
        {found.protocolVersion === null ? null : (
          <>
            <dt>Protocol</dt>
            <dd>version {found.protocolVersion}</dd>
          </>
        )}
        <dt>Holds</dt>
        <dd>
          {plural(found.files, "file")}, {bytesWords(found.bytes)}
        </dd>
        <dt>Signed by</dt>
        <dd class="figures fingerprint">{found.fingerprint ?? "nobody"}</dd>
      </dl>
      {found.refusal === null ? null : (
        <p class="study-refusal" role="alert">
          {found.refusal}
        </p>
      )}
      {found.kind === "return" && found.refusal === null ? (
        <label class="scan-choice">
          <input
            type="checkbox"
            checked={allowOpen}
            disabled={disabled}
            onChange={(event) => setAllowOpen(event.currentTarget.checked)}
          />
          <span>Take it even when ends in it are still open. The study notes it.</span>
        </label>
      ) : null}
    </div>
  );
}

interface TakenProps {
  readonly taken: TakenPacket;
  readonly services: Services;
  readonly close: () => void;
}

function Taken({ taken, services, close }: TakenProps) {
  const { kind, code, outcome, study, specimen, pass, fingerprint, notes } = taken;
  const next =
    kind === "return" && study !== null
      ? { label: "To the study", go: () => services.goTo({ screen: "study", study, part: "passes" }) }
      : kind === "assignment" && pass !== null
        ? { label: "Open it on the desk", go: () => services.goTo({ screen: "desk", specimen, pass }) }
        : null;
  const foot = (
    <>
      <button type="button" class={next === null ? "button main" : "button"} onClick={close}>
        Done
      </button>
      {next === null ? null : (
        <button
          type="button"
          class="button main"
          onClick={() => {
            close();
            next.go();
          }}
        >
          {next.label}
        </button>
      )}
    </>
  );
  return (
    <Sheet
      title={outcome === "known" ? "This packet was taken in before" : "Taken in"}
      close={close}
      foot={foot}
      kind="packet-sheet"
    >
      <div role="status" class="packet-taken">
        <p>
          {outcome === "known"
            ? `The very same packet (${KINDS[kind]}, code ${code}) is in the library already. Nothing was changed.`
            : `Every file agrees with its checksum. ${kind === "return" ? "The pass" : kind === "scan" ? "The scan" : "The assignment"} with the code ${code} is in the library.`}
        </p>
        {notes.map((note) => (
          <p key={note}>{note}</p>
        ))}
        <p class="soft">
          {fingerprint === null ? (
            "It was not signed."
          ) : (
            <>
              Signed by <span class="figures fingerprint">{fingerprint}</span>. Compare it with what the sender tells you on
              another way.
            </>
          )}
        </p>
      </div>
    </Sheet>
  );
}
