import type { ScanReadings } from "#shared/volume/scan-header.ts";

export interface ReadingFormProps {
  readonly readings: ScanReadings;
  /** From 0; null = not chosen yet. */
  readonly channel: number | null;
  readonly time: number | null;
  readonly change: (change: { channel?: number; time?: number }) => void;
}

/** A scan of several channels or time points: the person picks the one that is taken in. */
export function ReadingForm({ readings, channel, time, change }: ReadingFormProps) {
  return (
    <fieldset class={isChosen(readings, channel, time) ? undefined : "unsettled"}>
      <legend>Which of several</legend>
      <p class="soft">
        The file holds more than one volume of this size; a specimen is one of them. The picture shows the chosen one.
      </p>
      <div class="scan-axes">
        {readings.channels > 1 ? (
          <Pick label="Channel" count={readings.channels} value={channel} set={(n) => change({ channel: n })} />
        ) : null}
        {readings.times > 1 ? (
          <Pick label="Time point" count={readings.times} value={time} set={(n) => change({ time: n })} />
        ) : null}
      </div>
    </fieldset>
  );
}

/** True when nothing is left to choose. */
export function isChosen(readings: ScanReadings | undefined, channel: number | null, time: number | null): boolean {
  return readings === undefined || ((readings.channels < 2 || channel !== null) && (readings.times < 2 || time !== null));
}

interface PickProps {
  readonly label: string;
  readonly count: number;
  readonly value: number | null;
  readonly set: (value: number) => void;
}

/** Most entries of a list; beyond, a number is typed. */
const MOST_LISTED = 64;

function Pick({ label, count, value, set }: PickProps) {
  const take = (text: string) => {
    const n = Number(text);
    if (text !== "" && Number.isInteger(n) && n >= 1 && n <= count) set(n - 1);
  };
  const shown = value === null ? "" : String(value + 1);
  return (
    <label>
      <span>
        {label} (1 to {count})
      </span>
      {count > MOST_LISTED ? (
        <input
          class="field figures"
          type="number"
          min={1}
          max={count}
          value={shown}
          onChange={(event) => take(event.currentTarget.value)}
        />
      ) : (
        <select class="field" value={shown} onChange={(event) => take(event.currentTarget.value)}>
          <option value="" disabled>
            choose …
          </option>
          {Array.from({ length: count }, (_, k) => (
            <option key={k} value={String(k + 1)}>
              {k + 1}
            </option>
          ))}
        </select>
      )}
    </label>
  );
}
