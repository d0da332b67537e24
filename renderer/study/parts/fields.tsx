import type { ComponentChildren } from "preact";
import { useId } from "preact/hooks";

interface FieldProps {
  readonly label: string;
  readonly value: string;
  readonly set: (value: string) => void;
  /** A sentence under the field that says what to put in and why. */
  readonly help?: ComponentChildren;
}

/** One line of text with its label and help. */
export function TextField({ label, value, set, help, wide = false }: FieldProps & { readonly wide?: boolean }) {
  const helpId = useId();
  return (
    <div class={wide ? "study-field wide" : "study-field"}>
      <label class="stacked">
        <span>{label}</span>
        <input
          class="field"
          value={value}
          maxLength={200}
          aria-describedby={help === undefined ? undefined : helpId}
          onInput={(event) => set(event.currentTarget.value)}
        />
      </label>
      <Help id={helpId} help={help} />
    </div>
  );
}

/** A number, kept as typed until it is used; its unit stands behind the field. */
export function NumberField({ label, value, set, help, unit }: FieldProps & { readonly unit?: string }) {
  const helpId = useId();
  return (
    <div class="study-field">
      <label class="stacked">
        <span>
          {label}
          {unit === undefined ? null : <span class="soft">, {unit}</span>}
        </span>
        <input
          class="field figures study-number"
          inputMode="decimal"
          value={value}
          maxLength={20}
          aria-describedby={help === undefined ? undefined : helpId}
          onInput={(event) => set(event.currentTarget.value)}
        />
      </label>
      <Help id={helpId} help={help} />
    </div>
  );
}

/** Several lines of text with its label and help. */
export function LongField({ label, value, set, help }: FieldProps) {
  const helpId = useId();
  return (
    <div class="study-field wide">
      <label class="stacked">
        <span>{label}</span>
        <textarea
          class="field"
          rows={3}
          value={value}
          maxLength={2000}
          aria-describedby={help === undefined ? undefined : helpId}
          onInput={(event) => set(event.currentTarget.value)}
        />
      </label>
      <Help id={helpId} help={help} />
    </div>
  );
}

/** One of a few, from a list. */
export function ChoiceField<Value extends string>({
  label,
  value,
  set,
  help,
  choices,
}: Omit<FieldProps, "value" | "set"> & {
  readonly value: Value;
  readonly set: (value: Value) => void;
  readonly choices: readonly { readonly value: Value; readonly label: string }[];
}) {
  const helpId = useId();
  return (
    <div class="study-field">
      <label class="stacked">
        <span>{label}</span>
        <select
          class="field"
          value={value}
          aria-describedby={help === undefined ? undefined : helpId}
          onChange={(event) => set(event.currentTarget.value as Value)}
        >
          {choices.map((choice) => (
            <option key={choice.value} value={choice.value}>
              {choice.label}
            </option>
          ))}
        </select>
      </label>
      <Help id={helpId} help={help} />
    </div>
  );
}

function Help({ id, help }: { readonly id: string; readonly help: ComponentChildren }) {
  return help === undefined ? null : (
    <p id={id} class="soft study-help">
      {help}
    </p>
  );
}
