import type { SectionInk } from "#renderer/section/section-ink.ts";
import type { DrawnStrand } from "#shared/marks/drawn-strand.ts";

/** A strand's colour on the section; a quiet strand has none of its own. */
export function strandInk(drawn: Pick<DrawnStrand, "manner" | "mark">, ink: SectionInk): string {
  return drawn.manner === "quiet" ? ink.ink : ink.trees[drawn.mark.colour]!;
}
