import type { ReadonlySignal } from "@preact/signals";
import type { Services } from "#renderer/app/services.ts";
import type { LineFacts } from "#renderer/desk/model/line-facts.ts";
import type { FollowedLine, SectionModel } from "#renderer/desk/model/section-model.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";

/** What the section's bar and its pictures need, whatever the screen. */
export interface SectionSource {
  readonly services: Services;
  readonly specimen: ReadonlySignal<SpecimenRecord>;
  readonly section: SectionModel;
}

/** What a strip needs, whatever the screen. */
export interface StripSource extends SectionSource {
  /** The strand that is laid straight; null = none. */
  readonly lineFacts: ReadonlySignal<LineFacts | null>;
  /** What the strip says while it shows none; left out = the strip's own words. */
  readonly stripHint?: string;
  /** The line that the across plane follows. */
  followed(): FollowedLine | null;
}
