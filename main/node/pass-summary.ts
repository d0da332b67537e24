import type { PassFile } from "#main/node/pass-file.ts";
import type { PassSummary } from "#shared/api/specimen.ts";
import type { PassHistory } from "#shared/log/history.ts";
import { factsOf } from "#shared/log/pass-facts.ts";

/** The summary of a pass as the shelf lists it, from its history and its file. */
export function summarise(history: PassHistory, file: PassFile): PassSummary {
  const { pass, specimen, annotator, number } = history.header;
  const named = file.name === undefined ? {} : { name: file.name };
  return { id: pass, specimen, annotator, number, state: file.state, synthetic: file.synthetic, ...factsOf(history), ...named };
}
