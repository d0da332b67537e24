import type { ComponentChildren } from "preact";
import { KeepForm } from "#renderer/shelf/add-scan/keep-form.tsx";
import type { LookState } from "#renderer/shelf/add-scan/look-through.ts";
import { partOf } from "#renderer/shelf/add-scan/part-draft.ts";
import { PartForm } from "#renderer/shelf/add-scan/part-form.tsx";
import { ReadingForm } from "#renderer/shelf/add-scan/reading-form.tsx";
import { needsCheck, type ScanDraft, spacingDoubts, typedSpacing } from "#renderer/shelf/add-scan/scan-draft.ts";
import { sidesWords, spacingWords, voxelsWords } from "#renderer/shelf/words.ts";
import type { ScanInfo, ScanLookAnswer } from "#shared/api/routes.ts";

export interface ConfirmFormProps {
  readonly look: ScanLookAnswer;
  readonly draft: ScanDraft;
  readonly change: (change: Partial<ScanDraft>) => void;
  readonly submit: () => void;
  readonly through: LookState;
  readonly beginLook: () => void;
  readonly stopLook: () => void;
  readonly id: string;
}

/** What the person confirms: name, voxel size, handedness, polarity, facts. */
export function ConfirmForm({ look, draft, change, submit, id, through, beginLook, stopLook }: ConfirmFormProps) {
  const { info, readings } = look;
  const spacing = typedSpacing(draft);
  const part = partOf(info.size, draft.part);
  return (
    <form
      id={id}
      class="scan-form"
      onSubmit={(event) => {
        event.preventDefault();
        submit();
      }}
    >
      <Text label="Name of the specimen" value={draft.name} set={(name) => change({ name })} />
      {readings === undefined ? null : (
        <ReadingForm readings={readings} channel={draft.channel} time={draft.time} change={change} />
      )}
      <VoxelSize info={info} draft={draft} change={change} />
      <fieldset>
        <legend>Handedness</legend>
        <p class="soft">
          When a scanner writes its slices in reversed order, the valve becomes its mirror image and the two papillary muscles
          trade places. One slice alone does not show it: say it here if you know how the scanner writes, else leave it open and
          confirm it later on the shelf, with a look in space.
        </p>
        <Choice name="handedness" value="unknown" now={draft.handedness} set={(handedness) => change({ handedness })}>
          not known yet; can be confirmed later
        </Choice>
        <Choice name="handedness" value="as-shown" now={draft.handedness} set={(handedness) => change({ handedness })}>
          right as the file has it
        </Choice>
        <Choice name="handedness" value="mirrored" now={draft.handedness} set={(handedness) => change({ handedness })}>
          mirrored: take the slices in reversed order
        </Choice>
      </fieldset>
      <fieldset>
        <legend>Strings in the scan are</legend>
        <Choice name="polarity" value="bright" now={draft.polarity} set={(polarity) => change({ polarity })}>
          brighter than their surroundings
        </Choice>
        <Choice name="polarity" value="dark" now={draft.polarity} set={(polarity) => change({ polarity })}>
          darker than their surroundings
        </Choice>
      </fieldset>
      <PartForm
        size={info.size}
        spacing={spacing}
        draft={draft.part}
        change={(next) => change({ part: { ...draft.part, ...next } })}
        look={through}
        beginLook={beginLook}
        stopLook={stopLook}
      />
      <KeepForm
        size={info.size}
        dtype={info.dtype}
        spacing={spacing}
        region={"region" in part ? part.region : null}
        isMirrored={draft.handedness === "mirrored"}
        inPlace={look.inPlace}
        keep={draft.keep}
        change={(keep) => change({ keep })}
        look={through}
        beginLook={beginLook}
      />
      <fieldset>
        <legend>Facts about the specimen, as far as known</legend>
        <div class="scan-facts">
          <Text label="Species" value={draft.species} set={(species) => change({ species })} />
          <Text label="Fixation" value={draft.fixation} set={(fixation) => change({ fixation })} />
          <Text label="Medium or stain" value={draft.medium} set={(medium) => change({ medium })} />
          <Text label="Pressure, mmHg" value={draft.pressure} set={(pressure) => change({ pressure })} numeric />
          <Text label="State, for example closed" value={draft.state} set={(state) => change({ state })} />
        </div>
      </fieldset>
    </form>
  );
}

interface VoxelSizeProps extends Pick<ConfirmFormProps, "draft" | "change"> {
  readonly info: ScanInfo;
}

function VoxelSize({ info, draft, change }: VoxelSizeProps) {
  const spacing = typedSpacing(draft);
  const doubts = spacing === null ? [] : spacingDoubts(info, spacing);
  const unsettled = info.spacing === null;
  const headerWords = info.warnings.filter(({ code }) => code === "no-unit" || code === "no-spacing" || code === "bad-spacing");
  const setAxis = (axis: number, text: string) => {
    const next = draft.spacing.map((before, k) => (k === axis ? text : before));
    change({ spacing: [next[0]!, next[1]!, next[2]!], checked: false });
  };
  return (
    <fieldset class={unsettled ? "scan-spacing unsettled" : "scan-spacing"}>
      <legend>Voxel size</legend>
      {headerWords.map(({ message }) => (
        <p key={message} class="warn">
          {message}
        </p>
      ))}
      <div class="scan-axes">
        {(["x", "y", "z"] as const).map((axis, k) => (
          <label key={axis}>
            <span>{axis}</span>
            <input
              class="field figures"
              inputMode="decimal"
              aria-label={`Voxel size along ${axis}`}
              value={draft.spacing[k]}
              onInput={(event) => setAxis(k, event.currentTarget.value)}
            />
          </label>
        ))}
        <select
          class="field"
          aria-label="Unit of the voxel size"
          value={draft.unit ?? ""}
          onChange={(event) => {
            const { value } = event.currentTarget;
            change({ unit: value === "µm" || value === "mm" ? value : null, checked: false });
          }}
        >
          <option value="" disabled>
            unit …
          </option>
          <option value="µm">µm</option>
          <option value="mm">mm</option>
        </select>
      </div>
      <p class="scan-words" aria-live="polite">
        {spacing === null
          ? "The size of the whole scan stands here once the voxel size is given."
          : `${voxelsWords(info.size)} of ${spacingWords([spacing[0], spacing[1], spacing[2]])}: ${sidesWords(info.size, spacing)}`}
      </p>
      {doubts.map((sentence) => (
        <p key={sentence} class="warn">
          {sentence}
        </p>
      ))}
      {spacing !== null && needsCheck(info, spacing) ? (
        <label class="scan-choice">
          <input type="checkbox" checked={draft.checked} onChange={(event) => change({ checked: event.currentTarget.checked })} />
          <span>I have checked that this voxel size is right</span>
        </label>
      ) : null}
    </fieldset>
  );
}

interface TextProps {
  readonly label: string;
  readonly value: string;
  readonly set: (value: string) => void;
  readonly numeric?: boolean;
}

function Text({ label, value, set, numeric = false }: TextProps) {
  return (
    <label class="stacked">
      <span>{label}</span>
      <input
        class="field"
        value={value}
        maxLength={120}
        inputMode={numeric ? "decimal" : "text"}
        onInput={(event) => set(event.currentTarget.value)}
      />
    </label>
  );
}

interface ChoiceProps<T extends string> {
  readonly name: string;
  readonly value: T;
  readonly now: T;
  readonly set: (value: T) => void;
  readonly children: ComponentChildren;
}

function Choice<T extends string>({ name, value, now, set, children }: ChoiceProps<T>) {
  return (
    <label class="scan-choice">
      <input type="radio" name={name} value={value} checked={now === value} onChange={() => set(value)} />
      <span>{children}</span>
    </label>
  );
}
