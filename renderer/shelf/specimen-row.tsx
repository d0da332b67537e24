import { useEffect, useRef, useState } from "preact/hooks";
import type { Services } from "#renderer/app/services.ts";
import { HandednessSheet } from "#renderer/shelf/handedness-sheet.tsx";
import { NewPass } from "#renderer/shelf/new-pass.tsx";
import { RemoveSheet } from "#renderer/shelf/remove-sheet.tsx";
import { SpecimenPicture } from "#renderer/shelf/specimen-picture.tsx";
import { dateWords, factsWords, keptWords, passWords, sidesWords, spacingWords, voxelsWords } from "#renderer/shelf/words.ts";
import { SidesSheet } from "#renderer/study/side-by-side/sides-sheet.tsx";
import type { PassSummary, ShelfSpecimen } from "#shared/api/specimen.ts";

export interface SpecimenRowProps {
  readonly shown: ShelfSpecimen;
  readonly services: Services;
  /** Just made by a job: brought into view, and its next step gets the focus. */
  readonly fresh: boolean;
  readonly reload: () => Promise<void>;
}

/** One specimen: its picture, what is known of it, its passes. */
export function SpecimenRow({ shown, services, fresh, reload }: SpecimenRowProps) {
  const [asking, setAsking] = useState<"pass" | "remove" | "handedness" | "sides" | null>(null);
  const row = useRef<HTMLLIElement>(null);
  const newPass = useRef<HTMLButtonElement>(null);
  useEffect(() => {
    if (!fresh) return;
    row.current?.scrollIntoView({ block: "nearest" });
    newPass.current?.focus();
  }, [fresh]);
  const { specimen, passes, incomplete } = shown;
  const { volume } = specimen;
  const [fault, setFault] = useState<string | null>(null);
  const kept = keptWords(volume);
  const facts = factsWords(specimen.facts);
  const open = (pass: PassSummary) => services.goTo({ screen: "desk", specimen: specimen.id, pass: pass.id });
  const known = [
    ...new Set(
      [...passes]
        .sort((a, b) => b.changed - a.changed)
        .filter((p) => !p.synthetic)
        .map((p) => p.annotator),
    ),
  ];
  // The question takes the button's place: the focus goes back to the button once it stands there again.
  const asked = useRef(asking);
  useEffect(() => {
    if (asking === null && asked.current === "pass") newPass.current?.focus();
    asked.current = asking;
  }, [asking]);
  const close = () => setAsking(null);
  return (
    <li ref={row} class={fresh ? "shelf-row pane fresh" : "shelf-row pane"} aria-labelledby={`specimen-${specimen.id}`}>
      <SpecimenPicture client={services.client} shown={shown} tell={setFault} />
      <div class="shelf-about">
        <h2 id={`specimen-${specimen.id}`}>
          {specimen.name}
          {specimen.synthetic ? <span class="shelf-tag">synthetic</span> : null}
          {incomplete ? <span class="shelf-tag">being taken in</span> : null}
        </h2>
        <p>
          {voxelsWords(volume.size)} of {spacingWords(volume.spacing)}
        </p>
        <p>{sidesWords(volume.size, volume.spacing)}</p>
        {kept === "" ? null : <p class="soft">{kept}</p>}
        {/* A scan of the library's own is there or the library is damaged; one that is used in place may have been moved. */}
        {volume.inPlace && fault !== null ? (
          <p class="warn" role="alert">
            {fault}
          </p>
        ) : null}
        {facts === "" ? null : <p class="soft">{facts}</p>}
        {volume.handedness === "unknown" ? (
          <p class="soft">
            handedness not confirmed
            <button type="button" class="button plain shelf-confirm" onClick={() => setAsking("handedness")}>
              Confirm …<span class="unseen"> the handedness of {specimen.name}</span>
            </button>
          </p>
        ) : null}
        <button type="button" class="button plain shelf-quiet" onClick={() => setAsking("remove")}>
          Remove …<span class="unseen"> {specimen.name}</span>
        </button>
      </div>
      <div class="shelf-passes">
        {passes.length === 0 ? <p class="soft">No passes yet. Start one to trace on this scan.</p> : null}
        <ul>
          {passes.map((pass) => (
            <li key={pass.id}>
              <div>
                <p class="shelf-pass-name">
                  {pass.annotator}, pass {pass.number}
                  {pass.synthetic ? <span class="shelf-tag">synthetic</span> : null}
                  <span class={pass.state === "finished" ? "shelf-state done" : "shelf-state"}>
                    {pass.state === "finished" ? "finished" : "under way"}
                  </span>
                </p>
                <p class="soft">
                  {passWords(pass)} · <span class="shelf-date">{dateWords(pass.changed)}</span>
                </p>
              </div>
              <button type="button" class="button" onClick={() => open(pass)}>
                Open
                <span class="unseen">
                  {" "}
                  {pass.annotator}, pass {pass.number} of {specimen.name}
                </span>
              </button>
            </li>
          ))}
        </ul>
        {asking === "pass" ? (
          <NewPass
            specimen={specimen.id}
            known={known}
            close={close}
            create={async (annotator) => open(await services.client.createPass(specimen.id, annotator))}
          />
        ) : (
          <div class="shelf-next">
            <button type="button" class="button" ref={newPass} onClick={() => setAsking("pass")}>
              New pass<span class="unseen"> on {specimen.name}</span>
            </button>
            {passes.length === 0 ? null : (
              <button type="button" class="button" onClick={() => setAsking("sides")}>
                Side by side …<span class="unseen"> two passes of {specimen.name}</span>
              </button>
            )}
          </div>
        )}
      </div>
      {asking === "handedness" ? (
        <HandednessSheet
          client={services.client}
          specimen={specimen}
          close={close}
          confirm={async () => {
            await services.client.changeSpecimen(specimen.id, { handedness: "confirmed" });
            await reload();
            close();
          }}
        />
      ) : null}
      {asking === "sides" ? (
        <SidesSheet
          specimen={specimen}
          passes={passes}
          now={null}
          close={close}
          show={(a, b) => services.goTo({ screen: "side-by-side", specimen: specimen.id, a, b })}
        />
      ) : null}
      {asking === "remove" ? (
        <RemoveSheet
          shown={shown}
          close={close}
          remove={async (force) => {
            await services.client.removeSpecimen(specimen.id, force);
            await reload();
            services.notices.news(`${specimen.name} was removed.`);
          }}
        />
      ) : null}
    </li>
  );
}
