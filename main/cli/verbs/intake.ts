import { randomBytes } from "node:crypto";
import { basename, join } from "node:path";
import { wordOption } from "#main/cli/number-option.ts";
import { givenChoice, RAW_HELP, RAW_OPTIONS } from "#main/cli/raw-option.ts";
import { givenRegion, REGION_HELP, REGION_OPTIONS } from "#main/cli/region-option.ts";
import { givenSpacing, SPACING_HELP, SPACING_OPTIONS, settledSpacing } from "#main/cli/spacing-option.ts";
import type { Verb, VerbCall } from "#main/cli/verb.ts";
import { removeUnfinished } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";
import { samplePacking } from "#main/intake/packing/sample-packing.ts";
import type { IntakeProgress } from "#main/intake/progress.ts";
import { runIntake } from "#main/intake/run-intake.ts";
import type { ScanChoice } from "#main/intake/slice-source.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { createId } from "#main/node/layout.ts";
import { processFacts, takeLease } from "#main/node/lease.ts";
import type { KeptAs } from "#shared/api/routes.ts";
import type { SpecimenFacts } from "#shared/api/specimen.ts";
import { TautlineError } from "#shared/errors.ts";
import { FITS_IN_PLACE } from "#shared/volume/store/zarr-layout.ts";

/** `tautline intake`: makes a specimen of a scan. */
export const intake: Verb = {
  name: "intake",
  summary: "take a scan into a library as a specimen",
  help: `tautline intake <volume> --library DIR [--spacing sx,sy,sz --unit um] [options] [--json]

Copies a scan into the library as a store that opens at any size, with its hash. The scan itself is only read. A voxel size
that the header leaves open, or that looks odd, must be given; nothing is guessed. Stopped at any moment, the library
is as it was; start the same command again.

  --library DIR          the library's folder; it is made when it is not there
${SPACING_HELP}
  --name TEXT            the specimen's name (the file's name when not given)
  --handedness H         confirmed or unknown (unknown when not given): whether someone has seen that it is not mirrored
  --mirror               reverse the order of slices: the file shows the specimen mirrored
  --polarity P           bright or dark strings (as the values suggest when not given)
${REGION_HELP}
  --compress             pack the bricks of the store with gzip: smaller, slower to open; the cost is told on stderr
  --in-place             use an OME-Zarr's own store where it lies: only coarser levels are written (see below)
  --channel n, --time n  which one to read where a scan has several, from 0
  --species, --fixation, --medium, --state TEXT, --pressure mmHg   facts of the specimen
${RAW_HELP}

A store fits for --in-place with ${FITS_IN_PLACE}.
It is only read, and has to stay where it is, unchanged; that is checked each time the specimen is opened.`,
  options: {
    library: { type: "string" },
    ...SPACING_OPTIONS,
    name: { type: "string" },
    handedness: { type: "string" },
    mirror: { type: "boolean" },
    polarity: { type: "string" },
    ...REGION_OPTIONS,
    compress: { type: "boolean" },
    "in-place": { type: "boolean" },
    channel: { type: "string" },
    time: { type: "string" },
    ...RAW_OPTIONS,
    species: { type: "string" },
    fixation: { type: "string" },
    medium: { type: "string" },
    state: { type: "string" },
    pressure: { type: "string" },
  },
  positionals: [1, 1],
  async run(call) {
    const { positionals, options, io, say } = call;
    const path = positionals[0]!;
    if (typeof options.library !== "string" || options.library === "")
      throw new TautlineError("misuse", "intake needs --library DIR, the folder that holds the specimens.", {
        what: "--library",
      });
    const library = options.library;
    const handedness = wordOption(options, "handedness", ["confirmed", "unknown"] as const) ?? "unknown";
    const polarity = wordOption(options, "polarity", ["bright", "dark"] as const);
    const choice = givenChoice(options);
    const facts = givenFacts(options);
    const given = givenSpacing(options);
    const source = await openScan(path, choice);
    const { header } = source;
    await source.close();
    const keep = givenKeep(options);
    const region = givenRegion(options, source.name, header.size);
    const spacing = settledSpacing(header, source.name, given, { strict: true, say });
    const files = diskFiles();
    const random = (count: number) => new Uint8Array(randomBytes(count));
    await files.makeFolder(library);
    const lease = await takeLease({ files, path: join(library, "lease.json"), what: "intake", facts: processFacts(), random });
    try {
      await removeUnfinished(library);
      const order = {
        path,
        library,
        id: createId(random),
        created: Date.now(),
        name: typeof options.name === "string" && options.name !== "" ? options.name : plainName(path),
        spacing,
        handedness,
        mirror: options.mirror === true,
        ...(region ? { region } : {}),
        keep,
        ...(polarity ? { polarity } : {}),
        facts,
        ...choice,
      };
      if (keep === "packed") await tellCost(path, choice, call);
      const made = await runIntake(order, { signal: io.signal, onProgress: progressLine(say) });
      const { record } = made;
      if (record.id !== order.id)
        say(`${source.name}: ${record.name} (${record.id}) missed this scan and was given its new place; its passes stay.`);
      const json = {
        specimen: record.id,
        sha256: record.volume.sha256,
        seconds: made.seconds,
        bytesRead: made.bytesRead,
        bytesWritten: made.bytesWritten,
        peakMemoryBytes: process.resourceUsage().maxRSS * 1024,
        cpuSeconds: cpuSeconds(),
        size: record.volume.size,
        kept: keep,
        storeBytes: made.storeBytes,
        ...(record.volume.derivedFrom ? { derivedFrom: record.volume.derivedFrom } : {}),
        conversions: record.conversions,
      };
      if (keep === "packed") {
        const share = Math.round((made.storeBytes / made.plainBytes) * 100);
        say(`packed store: ${made.storeBytes} bytes, ${share} % of a plain one (${made.plainBytes} bytes).`);
      }
      for (const sentence of record.conversions) say(`${source.name}: ${sentence}`);
      const text = `${record.name} is specimen ${record.id} of ${library}\nsha256 ${record.volume.sha256}`;
      return { json, text, exit: 0 };
    } finally {
      await lease.release();
    }
  },
};

function givenKeep(options: VerbCall["options"]): KeptAs {
  const [isPacked, isInPlace] = [options.compress === true, options["in-place"] === true];
  const [isMirrored, isPart] = [options.mirror === true, options.crop !== undefined || options.bin !== undefined];
  const other = isPacked ? "--compress" : isMirrored ? "--mirror" : isPart ? "--crop or --bin" : null;
  if (isInPlace && other !== null) {
    const what = `--in-place uses the scan's own store as it is and cannot go with ${other}. Leave one of them out.`;
    throw new TautlineError("misuse", what, { what });
  }
  return isInPlace ? "in-place" : isPacked ? "packed" : "plain";
}

/** What packing will gain and cost, on a sample of the scan, before the work begins. */
async function tellCost(path: string, choice: ScanChoice, { io, say }: VerbCall): Promise<void> {
  const sample = await samplePacking(path, choice, io.signal);
  if (sample === null) {
    say("--compress: what it gains cannot be measured beforehand on this scan; it is told at the end.");
    return;
  }
  const share = Math.round(sample.ratio * 100);
  const mbPerSecond = Math.round(sample.packedBytesPerSecond / 1e6);
  const costs = `packing takes a second of one core for ${mbPerSecond} MB, a brick opens ${sample.unpackMs.toFixed(2)} ms later`;
  say(`--compress: ${share} % of a plain store, measured on ${sample.bricks} bricks of the whole scan; ${costs}.`);
}

/** CPU time of all threads of this process so far. */
function cpuSeconds(): number {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1e6;
}

function givenFacts(options: VerbCall["options"]): SpecimenFacts {
  const text = (key: string) => (typeof options[key] === "string" && options[key] !== "" ? { [key]: options[key] } : {});
  const pressure = options.pressure === undefined ? undefined : Number(options.pressure);
  if (pressure !== undefined && (!Number.isFinite(pressure) || options.pressure === ""))
    throw new TautlineError("misuse", `--pressure must be a number of mmHg, found '${String(options.pressure)}'.`, {
      what: "--pressure",
    });
  return {
    ...text("species"),
    ...text("fixation"),
    ...text("medium"),
    ...text("state"),
    ...(pressure === undefined ? {} : { pressure }),
  };
}

function plainName(path: string): string {
  return (
    basename(path).replace(/(\.ome)?\.(nrrd|nhdr|mha|mhd|nii|nii\.gz|hdr|tiff?|zarr|raw|vol|raw\.json)$/i, "") || basename(path)
  );
}

/** A line at each tenth of the way, so that a log of a long intake stays short. */
function progressLine(say: (line: string) => void): (progress: IntakeProgress) => void {
  let told = -1;
  return ({ progress, step, bytesPerSecond, secondsLeft }) => {
    const tenth = Math.floor(progress * 10);
    if (tenth === told) return;
    told = tenth;
    const rate = bytesPerSecond === null ? "" : `, ${(bytesPerSecond / 1e6).toFixed(0)} MB/s`;
    const left = secondsLeft === null ? "" : `, ${secondsLeft} s left`;
    say(`${step}: ${tenth * 10} %${rate}${left}`);
  };
}
