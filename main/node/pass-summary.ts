import type { PassFile } from "#main/node/pass-file.ts";
import type { PassSummary } from "#shared/api/specimen.ts";
import type { PassHistory } from "#shared/log/history.ts";

/** The summary of a pass as the shelf lists it, from its history and its file. */
export function summarise(history: PassHistory, file: PassFile): PassSummary {
  const { header, document } = history;
  const nodes = [...document.nodes.values()];
  const doubtful = [...nodes, ...document.strands.values(), ...document.crossLinks.values()];
  return {
    id: header.pass,
    specimen: header.specimen,
    annotator: header.annotator,
    number: header.number,
    state: file.state,
    trees: document.trees.size,
    openEnds: nodes.filter(({ kind }) => kind === "open").length,
    doubts: doubtful.filter(({ certainty }) => certainty === "doubtful").length,
    edits: history.edits,
    workMs: history.workMs,
    changed: history.changed,
    synthetic: file.synthetic,
    ...(file.name === undefined ? {} : { name: file.name }),
  };
}
