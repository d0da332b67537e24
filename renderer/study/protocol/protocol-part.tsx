import { useEffect, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import { dateWords } from "#renderer/shelf/words.ts";
import { LongField } from "#renderer/study/parts/fields.tsx";
import { FreezeSheet } from "#renderer/study/protocol/freeze-sheet.tsx";
import { FrozenProtocol } from "#renderer/study/protocol/frozen-protocol.tsx";
import type { KeptState } from "#renderer/study/protocol/protocol-editing.ts";
import { ProtocolForm } from "#renderer/study/protocol/protocol-form.tsx";
import type { StudyModel } from "#renderer/study/study-model.ts";
import type { StudyView } from "#shared/api/study.ts";

interface PartProps {
  readonly model: StudyModel;
  readonly view: StudyView;
}

/** The protocol: to be filled in while it is open, to be read once it is frozen; and its earlier versions. */
export function ProtocolPart({ model, view }: PartProps) {
  const { protocol } = view;
  const [asking, setAsking] = useState<"freeze" | "revise" | null>(null);
  const editing = model.editing(protocol);
  useEffect(() => () => void editing.flush(), [editing]);
  const frozen = protocol.frozen !== null;
  const state = editing.state.value;
  const freeze = async () => {
    if (await editing.flush()) setAsking("freeze");
  };
  return (
    <div class="protocol-part">
      <div class="study-actions">
        <p class="study-next">
          <strong>Version {protocol.version}</strong>
          {protocol.frozen === null ? ", open for changes" : `, frozen on ${dateWords(protocol.frozen.at)}`}
        </p>
        {frozen ? (
          <button type="button" class="button" onClick={() => setAsking("revise")}>
            Begin the next version …
          </button>
        ) : (
          <>
            <Kept state={state} retry={() => void editing.flush()} />
            <button type="button" class="button main" onClick={() => void freeze()}>
              Freeze it …
            </button>
          </>
        )}
      </div>
      {protocol.frozen === null ? null : (
        <p class="soft frozen-line">
          SHA-256 <span class="figures hash">{protocol.frozen.sha256}</span>. A frozen version never changes: passes and numbers
          rest on it.
        </p>
      )}
      <Touches view={view} />
      {protocol.missing.length === 0 ? null : (
        <ul class="study-missing" aria-label="Still missing">
          {protocol.missing.map((sentence) => (
            <li key={sentence}>{sentence}</li>
          ))}
        </ul>
      )}
      <div class="pane study-part">
        {frozen ? (
          <FrozenProtocol content={protocol.content} readPicture={model.readPicture} />
        ) : (
          <ProtocolForm
            draft={editing.draft.value}
            change={(part) => editing.change(part)}
            keepPicture={model.keepPicture}
            readPicture={model.readPicture}
            failed={(error) => model.services.notices.failed(error)}
          />
        )}
      </div>
      <Versions view={view} />
      {asking === "freeze" ? <FreezeSheet model={model} view={view} close={() => setAsking(null)} /> : null}
      {asking === "revise" ? <ReviseSheet model={model} view={view} close={() => setAsking(null)} /> : null}
    </div>
  );
}

function Kept({ state, retry }: { readonly state: KeptState; readonly retry: () => void }) {
  switch (state.kind) {
    case "saved":
      return (
        <p class="good" role="status">
          saved
        </p>
      );
    case "saving":
      return <p role="status">saving</p>;
    case "problems":
      return (
        <div class="study-refusal" role="alert">
          <ul>
            {state.problems.map((problem) => (
              <li key={problem}>{problem}</li>
            ))}
          </ul>
        </div>
      );
    case "failed":
      return (
        <div class="study-refusal" role="alert">
          <p>Not saved: {state.message}</p>
          <button type="button" class="button" onClick={retry}>
            Try again
          </button>
        </div>
      );
  }
}

function Touches({ view }: { readonly view: StudyView }) {
  const { touches, version, frozen } = view.protocol;
  if (frozen !== null || version === 1) return null;
  return (
    <section class="study-touches" aria-label="What this version changes">
      {touches.length === 0 ? (
        <p class="soft">This version says the same as the one before, so far.</p>
      ) : (
        <ul>
          {touches.map(({ key, sentence }) => (
            <li key={key}>{sentence}</li>
          ))}
        </ul>
      )}
    </section>
  );
}

function Versions({ view }: { readonly view: StudyView }) {
  if (view.versions.length < 2) return null;
  return (
    <section class="study-group" aria-labelledby="protocol-versions">
      <h3 id="protocol-versions">Versions</h3>
      <ol class="study-events">
        {view.versions.map(({ version, frozen, reason, touches }) => (
          <li key={version}>
            <strong>Version {version}</strong>, {frozen === null ? "not frozen" : `frozen on ${dateWords(frozen.at)}`}
            {reason === "" ? "" : `. Why: ${reason}`}
            {touches.length === 0 ? null : (
              <ul class="soft">
                {touches.map(({ key, sentence }) => (
                  <li key={key}>{sentence}</li>
                ))}
              </ul>
            )}
          </li>
        ))}
      </ol>
    </section>
  );
}

function ReviseSheet({ model, view, close }: PartProps & { readonly close: () => void }) {
  const [reason, setReason] = useState("");
  const [failure, setFailure] = useState<string | null>(null);
  const begin = async () => {
    const why = await model.change(() => model.services.client.studies.reviseProtocol(view.id, reason.trim()));
    setFailure(why);
    if (why === null) close();
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="button" class="button main" disabled={reason.trim() === "" || model.busy.value} onClick={() => void begin()}>
        Begin version {view.protocol.version + 1}
      </button>
    </>
  );
  return (
    <Sheet title="The next version of the protocol" close={close} foot={foot} kind="small-sheet">
      <p>
        The next version begins as a copy of the frozen one. Until it is frozen itself, no packet can be made and no number
        either. Passes drawn by rules that it changes take no part in its analysis.
      </p>
      <LongField label="Why is it changed? This stands in the report." value={reason} set={setReason} />
      {failure === null ? null : (
        <p class="study-refusal" role="alert">
          {failure}
        </p>
      )}
    </Sheet>
  );
}
