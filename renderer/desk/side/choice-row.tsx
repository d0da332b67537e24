export interface ChoiceRowProps<T extends string | number> {
  readonly label: string;
  readonly options: readonly (readonly [T, string])[];
  readonly value: T | null | undefined;
  /** The chosen value; null when the chosen one is pressed again. */
  readonly set: (value: T | null) => void;
  readonly disabled: boolean;
}

/** One axis of a label as a row of buttons; pressing the chosen one takes the label away. */
export function ChoiceRow<T extends string | number>({ label, options, value, set, disabled }: ChoiceRowProps<T>) {
  return (
    <fieldset class="choice-row">
      <legend>{label}</legend>
      <div class="choices">
        {options.map(([option, text]) => (
          <button
            key={option}
            type="button"
            class="button choice"
            aria-pressed={value === option}
            disabled={disabled}
            onClick={() => set(value === option ? null : option)}
          >
            {text}
          </button>
        ))}
      </div>
    </fieldset>
  );
}
