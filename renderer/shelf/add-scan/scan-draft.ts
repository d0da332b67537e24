import { type PartDraft, partOf, wholeDraft } from "#renderer/shelf/add-scan/part-draft.ts";
import { isChosen } from "#renderer/shelf/add-scan/reading-form.tsx";
import type { ReadingChoice } from "#shared/api/projections.ts";
import type { IntakeRequest, KeptAs, ScanInfo } from "#shared/api/routes.ts";
import type { SpecimenFacts } from "#shared/api/specimen.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { sizeXyz } from "#shared/geometry/types.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import { toMm } from "#shared/volume/length-unit.ts";
import { PLACELESS, type ScanReadings } from "#shared/volume/scan-header.ts";
import { judgeSpacing } from "#shared/volume/spacing-policy.ts";

export type SpacingUnit = "µm" | "mm";
/** How the scan's slice order was judged by the person. */
export type HandednessChoice = "as-shown" | "mirrored" | "unknown";

/** What the person has filled in so far; numbers as typed. */
export interface ScanDraft {
  readonly name: string;
  readonly spacing: readonly [string, string, string];
  /** Null = the person still has to say it. */
  readonly unit: SpacingUnit | null;
  /** The person said that the voxel size is right. */
  readonly checked: boolean;
  readonly handedness: HandednessChoice;
  readonly polarity: Polarity;
  readonly species: string;
  readonly fixation: string;
  readonly medium: string;
  readonly pressure: string;
  readonly state: string;
  /** From 0; null = the person has not chosen one of several. */
  readonly channel: number | null;
  readonly time: number | null;
  readonly part: PartDraft;
  readonly keep: KeptAs;
}

/** The form as it opens: what the header settles is filled in, what it leaves open is left open. Nothing is guessed. */
export function draftOf(info: ScanInfo, polarity: Polarity): ScanDraft {
  const written = info.spacing?.map((mm) => mm * 1000) ?? info.headerSpacing ?? [null, null, null];
  const text = (value: number | null) => (value !== null && Number.isFinite(value) && value > 0 ? plain(value) : "");
  return {
    name: info.name.replace(/(\.ome)?(\.(nrrd|nhdr|mha|mhd|nii|hdr|tiff?|zarr|raw|vol|json|gz))+$/i, ""),
    spacing: [text(written[0]!), text(written[1]!), text(written[2]!)],
    unit: info.spacing === null ? null : "µm",
    checked: false,
    handedness: "unknown",
    polarity,
    species: "",
    fixation: "",
    medium: "",
    pressure: "",
    state: "",
    channel: null,
    time: null,
    part: wholeDraft(info.size),
    keep: "plain",
  };
}

/** Voxel size in millimetres as typed, or null while a number or the unit is missing or no length. */
export function typedSpacing(draft: Pick<ScanDraft, "spacing" | "unit">): Vec3 | null {
  if (draft.unit === null) return null;
  const factor = draft.unit === "µm" ? 0.001 : 1;
  const mm = draft.spacing.map((text) => {
    const value = readNumber(text);
    return value === null ? null : toMm(value, factor);
  });
  return mm.every((value) => value !== null && value > 0) ? (mm as unknown as Vec3) : null;
}

/** A number as people type it, with a point or a comma before the decimals; null when it is none. */
export function readNumber(text: string): number | null {
  const clean = text.trim().replace(",", ".");
  if (!/^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(clean)) return null;
  const value = Number(clean);
  return Number.isFinite(value) ? value : null;
}

/** Sentences on what looks odd about a typed voxel size, by the same rule that judges headers. */
export function spacingDoubts(info: ScanInfo, spacing: Vec3): string[] {
  const mmPerUnit: Vec3 = [1, 1, 1];
  const family = "generated" as const;
  const size = sizeXyz(...info.size);
  const judged = judgeSpacing({ ...PLACELESS, family, dtype: info.dtype, size, headerSpacing: spacing, unit: "mm", mmPerUnit });
  return judged.warnings.filter(({ code }) => code !== "no-frame").map(({ message }) => message);
}

/** True when the typed voxel size differs from the header's by more than rounding, so that a person must stand for it. */
export function differsFromHeader(info: ScanInfo, spacing: Vec3): boolean {
  return info.spacing === null || spacing.some((mm, axis) => Math.abs(mm / info.spacing![axis]! - 1) > 1e-6);
}

/** The channel and time point that were chosen, where there are several. */
export function readingOf({ channel, time }: Pick<ScanDraft, "channel" | "time">): ReadingChoice {
  return { ...(channel === null ? {} : { channel }), ...(time === null ? {} : { time }) };
}

/** The request to send, or the sentences that say what is still missing. */
export function intakeOf(
  path: string,
  info: ScanInfo,
  draft: ScanDraft,
  readings?: ScanReadings,
): { request: IntakeRequest } | { missing: string[] } {
  const missing: string[] = [];
  if (!isChosen(readings, draft.channel, draft.time)) missing.push("Choose which of the scan's volumes is taken in.");
  const name = draft.name.trim();
  if (name === "") missing.push("Give the specimen a name.");
  const spacing = typedSpacing(draft);
  if (draft.unit === null) missing.push("Say whether the voxel size is in micrometres or millimetres.");
  else if (spacing === null) missing.push("Give the voxel size along each axis, as positive numbers.");
  if (spacing !== null && needsCheck(info, spacing) && !draft.checked) missing.push("Confirm that the voxel size is right.");
  const pressure = draft.pressure.trim() === "" ? undefined : readNumber(draft.pressure);
  if (pressure === null || (pressure !== undefined && pressure < 0)) missing.push("The pressure is a number of mmHg, or empty.");
  const part = partOf(info.size, draft.part);
  if ("fault" in part) missing.push(part.fault);
  if (missing.length > 0 || spacing === null || "fault" in part) return { missing };
  const mirror = draft.handedness === "mirrored";
  // What cannot be used in place is copied: the form says so where it is chosen.
  const keep = draft.keep === "in-place" && (part.region !== null || mirror) ? "plain" : draft.keep;
  return {
    request: {
      path,
      ...readingOf(draft),
      name,
      spacing: [spacing[0], spacing[1], spacing[2]],
      handedness: draft.handedness === "unknown" ? "unknown" : "confirmed",
      ...(mirror ? { mirror: true } : {}),
      ...(part.region === null ? {} : { region: part.region }),
      ...(keep === "plain" ? {} : { keep }),
      polarity: draft.polarity,
      facts: factsOf(draft, pressure ?? undefined),
    },
  };
}

/** A header that settles a plain voxel size is confirmed by going on; anything else needs an explicit word. */
export function needsCheck(info: ScanInfo, spacing: Vec3): boolean {
  return differsFromHeader(info, spacing) || spacingDoubts(info, spacing).length > 0;
}

function factsOf(draft: ScanDraft, pressure: number | undefined): SpecimenFacts {
  const said = (text: string) => (text.trim() === "" ? undefined : text.trim());
  const entries = {
    species: said(draft.species),
    fixation: said(draft.fixation),
    medium: said(draft.medium),
    pressure,
    state: said(draft.state),
  };
  return Object.fromEntries(Object.entries(entries).filter(([, value]) => value !== undefined));
}

/** A number without the binary tail of unit conversion. */
function plain(value: number): string {
  return String(Number(value.toPrecision(9)));
}
