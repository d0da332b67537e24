import type { ComponentChildren } from "preact";
import type { LookState } from "#renderer/shelf/add-scan/look-through.ts";
import { bytesWords, sidesWords, spacingWords, timeLeftWords, voxelsWords } from "#renderer/shelf/words.ts";
import type { PackingSample } from "#shared/api/projections.ts";
import type { InPlaceVerdict, KeptAs } from "#shared/api/routes.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { SourceDtype } from "#shared/volume/dtype.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { type Region, regionGrid } from "#shared/volume/region/region.ts";
import { storeBytes } from "#shared/volume/store/store-bytes.ts";
import { storedTypeOf } from "#shared/volume/stored-type.ts";

export interface KeepFormProps {
  readonly size: Vec3;
  readonly dtype: SourceDtype;
  /** Millimetres, or null while it is not settled. */
  readonly spacing: Vec3 | null;
  /** Null: all of it. */
  readonly region: Region | null;
  readonly isMirrored: boolean;
  /** Absent: the scan is no store that could be used in place. */
  readonly inPlace: InPlaceVerdict | undefined;
  readonly keep: KeptAs;
  readonly change: (keep: KeptAs) => void;
  readonly look: LookState;
  readonly beginLook: () => void;
}

/** Bricks that an oblique plane of 900 x 700 pixels touches, for the sentence on packing. */
const BRICKS_OF_A_PLANE = 900;

/** What comes out and what it needs on disk: a plain or packed copy, or the scan's own store used in place. */
export function KeepForm(props: KeepFormProps) {
  const { size, dtype, spacing, region, isMirrored, inPlace, keep, change, look, beginLook } = props;
  const whole = plainGrid(size, spacing ?? [1, 1, 1]);
  const grid = region === null ? whole : regionGrid(whole, region);
  const settled = storedTypeOf(dtype)?.dtype;
  const bytes = storeBytes(grid, settled ?? "float32");
  const about = settled === undefined ? "at most" : "about";
  const sample = look.state === "done" ? look.answer.packing : undefined;
  const coarse = storeBytes(grid, settled ?? "float32", 1);
  const fits = inPlace?.fits === true && region === null && !isMirrored;
  return (
    <fieldset>
      <legend>How it is kept</legend>
      <p class="kept-words" aria-live="polite">
        {spacing === null
          ? voxelsWords(grid.size)
          : `${voxelsWords(grid.size)} of ${spacingWords(grid.spacing)}: ${sidesWords(grid.size, grid.spacing)}`}
      </p>
      <Way value="plain" now={keep} change={change}>
        as a copy: {about} {bytesWords(bytes)} on disk with its coarser levels
      </Way>
      <Way value="packed" now={keep} change={change}>
        as a packed copy: {packedWords(bytes, about, sample)}
      </Way>
      {keep === "packed" && sample === undefined ? (
        <div class="part-look">
          <span class="soft">
            {look.state === "running"
              ? ["Measuring on a sample of the scan", timeLeftWords(look.secondsLeft)].filter(Boolean).join(" · ")
              : "What packing gains and costs has not been measured on this scan yet."}
          </span>
          {look.state === "running" ? null : (
            <button type="button" class="button" onClick={beginLook}>
              Measure it
            </button>
          )}
        </div>
      ) : null}
      {inPlace === undefined ? null : (
        <Way value="in-place" now={keep} change={change} isOut={!fits}>
          where it lies: only the coarser levels are written, {about} {bytesWords(coarse)}
        </Way>
      )}
      {inPlace === undefined ? null : <p class="soft">{placeWords(inPlace, region !== null || isMirrored)}</p>}
    </fieldset>
  );
}

function packedWords(bytes: number, about: string, sample: PackingSample | null | undefined): string {
  if (!sample) return `at most ${bytesWords(bytes)} on disk, slower to open`;
  const share = Math.round(sample.ratio * 100);
  const wait = Math.round(sample.unpackMs * BRICKS_OF_A_PLANE);
  const time = wait >= 100 ? `${(wait / 1000).toFixed(1)} s` : `${wait} ms`;
  return `${about} ${bytesWords(bytes * sample.ratio)} on disk (${share} % of the plain copy, measured on ${sample.bricks} bricks of the whole scan). A plane that is not in memory yet opens up to ${time} of one core later`;
}

function placeWords(inPlace: InPlaceVerdict, isChanged: boolean): string {
  if (!inPlace.fits) return `It cannot be used where it lies: ${inPlace.why}`;
  if (isChanged) return "A part of a scan, a halved or a mirrored one is always copied.";
  return "Used where it lies, the scan is only read. It has to stay there unchanged; that is checked each time it is opened.";
}

interface WayProps {
  readonly value: KeptAs;
  readonly now: KeptAs;
  readonly change: (keep: KeptAs) => void;
  readonly isOut?: boolean;
  readonly children: ComponentChildren;
}

function Way({ value, now, change, isOut = false, children }: WayProps) {
  return (
    <label class="scan-choice">
      <input type="radio" name="keep" value={value} checked={now === value} disabled={isOut} onChange={() => change(value)} />
      <span>{children}</span>
    </label>
  );
}
