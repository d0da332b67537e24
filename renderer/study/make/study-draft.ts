import type { StudyDraft, StudyView } from "#shared/api/study.ts";

/** What a specimen is to a study. */
export type Part = "none" | "counted" | "training";

/** A study as it is being put together. */
export interface TypedStudy {
  readonly name: string;
  /** By specimen id; a specimen that is not here takes no part. */
  readonly parts: Readonly<Record<string, Part>>;
  /** A name a line, or between commas. */
  readonly annotators: string;
  readonly passes: string;
}

export const EMPTY_STUDY: TypedStudy = { name: "", parts: {}, annotators: "", passes: "2" };

/** A study as it stands, to be changed. */
export function typedOf(view: StudyView): TypedStudy {
  return {
    name: view.name,
    parts: Object.fromEntries(view.specimens.map(({ id, training }) => [id, training ? "training" : "counted"])),
    annotators: view.annotators.map(({ name }) => name).join("\n"),
    passes: String(view.passes),
  };
}

/** Names as typed, in order, spare spaces and empty ones left out. */
export function annotatorNames(text: string): string[] {
  return text
    .split(/[\n,;]/)
    .map((name) => name.trim())
    .filter((name) => name !== "");
}

/** What was typed as a study, or what is missing, one sentence each. @param order ids of the library's specimens as the shelf shows them */
export function draftOfTyped(
  typed: TypedStudy,
  order: readonly string[],
): { readonly draft: StudyDraft } | { readonly missing: readonly string[] } {
  const missing: string[] = [];
  const annotators = annotatorNames(typed.annotators);
  const chosen = (part: Part) => order.filter((id) => typed.parts[id] === part);
  const passes = Number(typed.passes.trim());
  if (typed.name.trim() === "") missing.push("Give the study a name.");
  if (chosen("counted").length === 0) missing.push("Choose at least one specimen that counts.");
  if (annotators.length === 0) missing.push("Name at least one annotator.");
  const twice = annotators.find((name, i) => annotators.indexOf(name) !== i);
  if (twice !== undefined) missing.push(`${twice} is named twice.`);
  if (!Number.isInteger(passes) || passes < 1 || passes > 9)
    missing.push(`Passes of each annotator: a whole number from 1 to 9 is expected, found "${typed.passes}".`);
  if (missing.length > 0) return { missing };
  return {
    draft: { name: typed.name.trim(), specimens: chosen("counted"), training: chosen("training"), annotators, passes },
  };
}

/** What the plan comes to, in one sentence. */
export function planSentence(typed: TypedStudy): string {
  const values = Object.values(typed.parts);
  const specimens = values.filter((part) => part === "counted").length;
  const training = values.filter((part) => part === "training").length;
  const annotators = annotatorNames(typed.annotators).length;
  const passes = Number(typed.passes) || 0;
  const round = training === 0 ? "" : `, and ${training * annotators} of the training round`;
  return `${specimens} × ${annotators} × ${passes}: ${specimens * annotators * passes} passes that count${round}.`;
}
