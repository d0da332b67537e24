import { mkdir, open, rename, rm, stat } from "node:fs/promises";
import { basename, dirname, join } from "node:path";
import { setImmediate as nextTurn } from "node:timers/promises";
import { wordOption } from "#main/cli/number-option.ts";
import { readTrees } from "#main/cli/read-trees.ts";
import type { Verb } from "#main/cli/verb.ts";
import type { ExportFormat } from "#shared/api/routes.ts";
import { TautlineError } from "#shared/errors.ts";
import { EXPORT_FORMATS, type Exported, exportTrees } from "#shared/formats/export.ts";

const UNFINISHED = ".unfinished";
const BY_ENDING: readonly (readonly [RegExp, ExportFormat])[] = [
  [/\.chordae\.json$/i, "chordae"],
  [/\.graphml$/i, "graphml"],
  [/\.vtp$/i, "vtp"],
  [/\.nrrd$/i, "labels"],
];

/** `tautline convert`: trees from one format into another. */
export const convert: Verb = {
  name: "convert",
  summary: "write trees as GraphML, PolyData, tables, a label volume or a tree file",
  help: `tautline convert IN OUT [--to ${EXPORT_FORMATS.join("|")}] [--labels trees|strands] [--json]

Reads trees (.chordae.json, .graphml, .vtp, or a folder of tables) and writes them in another format; says what that format
cannot keep. The format comes from --to, else from the ending of OUT: .chordae.json, .graphml, .vtp, .nrrd (labels).
OUT is a folder for tables, which need --to. Labels need the scan's size and voxel size in IN.

  --to FORMAT      ${EXPORT_FORMATS.join(", ")}
  --labels WHAT    what a label volume's numbers stand for: trees (when not given) or strands`,
  options: { to: { type: "string" }, labels: { type: "string" } },
  positionals: [2, 2],
  async run({ positionals, options, io, say }) {
    const [from, to] = positionals as [string, string];
    const format = wordOption(options, "to", EXPORT_FORMATS) ?? formatOfName(to);
    const labelsOf = wordOption(options, "labels", ["trees", "strands"] as const);
    const { file, notes } = await readTrees(from);
    for (const note of notes) say(`${basename(from)}: ${note}`);
    const exported = exportTrees(format, file, basename(to), from, labelsOf);
    const places = format === "tables" ? exported.parts.map((part) => join(to, part.name)) : [to];
    await writeParts(exported, places, format === "tables" ? to : null, io.signal);
    for (const sentence of exported.lost) say(sentence);
    return { json: { written: places, lost: exported.lost }, text: places.join("\n"), exit: 0 };
  },
};

function formatOfName(name: string): ExportFormat {
  const found = BY_ENDING.find(([ending]) => ending.test(name));
  if (found) return found[1];
  const what = `The format of '${name}' cannot be seen from its ending: --to must name one of ${EXPORT_FORMATS.join(", ")}.`;
  throw new TautlineError("misuse", what, { what });
}

/** Writes every part under another name first; a failure or an interruption leaves none of them. */
async function writeParts(
  { parts }: Exported,
  places: readonly string[],
  folder: string | null,
  signal: AbortSignal,
): Promise<void> {
  await refuseUnwritable(places, folder);
  const created = folder === null ? undefined : await mkdir(folder, { recursive: true });
  try {
    for (const [i, part] of parts.entries()) {
      const handle = await open(`${places[i]}${UNFINISHED}`, "w");
      try {
        for (const chunk of part.chunks()) {
          await nextTurn();
          if (signal.aborted) throw new TautlineError("cancelled", "Interrupted.", { what: "convert" });
          for (let done = 0; done < chunk.length; ) done += (await handle.write(chunk, done)).bytesWritten;
        }
        await handle.sync();
      } finally {
        await handle.close();
      }
    }
    for (const place of places) await rename(`${place}${UNFINISHED}`, place);
  } catch (error) {
    for (const place of places) await rm(`${place}${UNFINISHED}`, { force: true });
    if (created !== undefined) await rm(created, { recursive: true, force: true });
    throw error;
  }
}

/** Said before anything is computed. */
async function refuseUnwritable(places: readonly string[], folder: string | null): Promise<void> {
  const misuse = (what: string) => new TautlineError("misuse", what, { what });
  if (folder !== null) {
    const found = await stat(folder).catch(() => undefined);
    if (found && !found.isDirectory()) throw misuse(`${folder} is a file; tables need the name of a folder.`);
    return;
  }
  for (const place of places) {
    const above = await stat(dirname(place)).catch(() => undefined);
    if (!above?.isDirectory()) throw misuse(`${place}: there is no folder ${dirname(place)}.`);
    if ((await stat(place).catch(() => undefined))?.isDirectory()) throw misuse(`${place} is a folder; name a file.`);
  }
}
