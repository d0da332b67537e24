import type { OpenEnd } from "#shared/api/study.ts";
import { unreadable } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { fileFromDocument } from "#shared/formats/chordae/file-from-document.ts";
import { parseChordaeFile } from "#shared/formats/chordae/read-chordae-file.ts";
import { readChain, splitLog } from "#shared/log/chain.ts";
import { PassHistory } from "#shared/log/history.ts";
import { type PassEffort, passEffort } from "#shared/log/pass-effort.ts";
import { documentFacts } from "#shared/log/pass-facts.ts";
import type { LogRecord } from "#shared/log/records.ts";
import type { ReturnPacket } from "#shared/study/packet.ts";
import { canonicalJson } from "#shared/study/protocol-change.ts";
import type { TreeDocument } from "#shared/trees/document.ts";

/** A returned pass, checked against itself. */
export interface ReturnedLog {
  readonly records: readonly LogRecord[];
  readonly history: PassHistory;
  readonly facts: { readonly trees: number; readonly openEnds: number; readonly doubts: number };
  readonly effort: PassEffort;
  /** UTC milliseconds of the first and last edit by the annotator's clock; null without edits. */
  readonly drawn: { readonly from: number; readonly to: number } | null;
}

/**
 * The log of a returned pass: its chain holds, it is the one that the packet names, and its fold gives the trees beside it.
 * @param log text of the journal. @param trees text of the tree file. @param packet name for messages.
 * @throws unreadable-input naming what does not fit
 */
export function readReturnedLog(about: ReturnPacket, log: string, trees: string, packet: string): ReturnedLog {
  const file = `${packet}, journal.jsonl`;
  const { lines, torn } = splitLog(log);
  if (torn !== null) throw unreadable(file, "a log that ends with a whole line", "a torn one");
  const chained = readChain(lines, undefined, file);
  const last = chained[chained.length - 1];
  const header = chained[0]?.record;
  if (header?.kind !== "header" || !last) throw unreadable(file, "a log", "no line");
  const { specimen, pass, epoch } = header.body;
  if (specimen !== about.assignment || pass !== about.log.pass || epoch !== about.log.epoch)
    throw unreadable(file, `the log of assignment ${about.assignment}`, `one of ${specimen}`, "line 1");
  if (last.record.seq !== about.log.seq || last.hash !== about.log.hash)
    throw unreadable(
      file,
      `${about.log.seq + 1} lines, the last with hash ${about.log.hash.slice(0, 12)}...`,
      `${lines.length} lines, ${last.hash.slice(0, 12)}...`,
    );
  const history = PassHistory.fromLines(lines, file);
  const given = parseChordaeFile(trees, `${packet}, pass.chordae.json`);
  if (canonicalJson(drawnIn(fileFromDocument(history.document, {}))) !== canonicalJson(drawnIn(given))) {
    const next = "The packet was put together by hand; ask for it again.";
    throw unreadable(`${packet}, pass.chordae.json`, "the trees that the log ends with", "others", undefined, next);
  }
  const records = chained.map(({ record }) => record);
  const { effort, drawn, ...facts } = factsOfLog(records, history.document);
  return { records, history, facts, effort, drawn };
}

/** What a study keeps of a returned pass beside its place: counts, effort and when it was drawn. @param document the log's fold */
export function factsOfLog(
  records: readonly LogRecord[],
  document: TreeDocument,
): ReturnedLog["facts"] & Pick<ReturnedLog, "effort" | "drawn"> {
  const times = records.filter(({ kind }) => kind === "op").map(({ t }) => t);
  const drawn = times.length === 0 ? null : { from: Math.min(...times), to: Math.max(...times) };
  return { ...documentFacts(document), effort: passEffort(records), drawn };
}

/** The part of a tree file that was drawn. */
function drawnIn({ trees, crossLinks, landmarks }: ChordaeFile) {
  return { trees, crossLinks, landmarks };
}

/** Ends of kind `open`, by tree and node. */
export function openEndsOf({ nodes, trees }: TreeDocument): OpenEnd[] {
  return [...nodes.values()]
    .filter(({ kind }) => kind === "open")
    .map(({ id, tree }) => ({ tree, treeName: trees.get(tree)?.name ?? tree, node: id }));
}
