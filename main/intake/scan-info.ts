import { placeVerdict } from "#main/intake/in-place/in-place-scan.ts";
import { openScan } from "#main/intake/open-scan.ts";
import { stopIfAborted } from "#main/intake/read-file.ts";
import type { ScanChoice, SliceSource } from "#main/intake/slice-source.ts";
import { surveySource } from "#main/intake/survey-source.ts";
import type { ScanInfo, ScanLookAnswer } from "#shared/api/routes.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import type { SourceArray } from "#shared/volume/source-array.ts";
import { judgeSpacing } from "#shared/volume/spacing-policy.ts";
import { chooseStoredType, storedTypeOf, undecidedSentence } from "#shared/volume/stored-type.ts";
import { displayWindow, histogramOf, suggestPolarity, ValueSurvey } from "#shared/volume/value-survey.ts";

export interface ScanInfoOptions {
  readonly choice?: ScanChoice;
  readonly signal?: AbortSignal;
}

/** Seekable scans up to this size are looked at whole; of larger ones, slices spread evenly. Streams are always read whole. */
const WHOLE_BYTES = 128 * 1024 * 1024;

interface Looked {
  readonly info: ScanInfo;
  readonly survey: ValueSurvey;
  readonly source: SliceSource;
}

/** What a scan's header and values say, with the warnings of the voxel-size policy. @throws unreadable-input */
export async function scanInfo(path: string, options: ScanInfoOptions = {}): Promise<ScanInfo> {
  return withScan(path, options, async ({ info }) => info);
}

/** {@link scanInfo}, and what else the header leaves a person to know, one sentence each. */
export async function scanInfoAndNotes(
  path: string,
  options: ScanInfoOptions = {},
): Promise<{ info: ScanInfo; notes: readonly string[] }> {
  return withScan(path, options, async ({ info, source }) => ({ info, notes: source.header.notes }));
}

/** All that the window shows before a scan is taken in: its facts, the middle slice, a histogram, what would be converted. */
export async function lookAtScan(path: string, options: ScanInfoOptions = {}): Promise<ScanLookAnswer> {
  return withScan(path, { ...options, choice: { ...options.choice, orFirst: true } }, async ({ info, survey, source }) => {
    const sample = survey.sortedSample();
    const place = await placeVerdict(path, { ...options.choice, orFirst: true });
    const counts = histogramOf(sample, info.range.min, info.range.max, 256);
    const slice = await middleSlice(source, displayWindow(sample), options.signal);
    return {
      info,
      slice,
      histogram: { min: info.range.min, max: info.range.max, counts },
      conversions: conversionsOf(source, survey, info.range.sampled),
      suggestedPolarity: suggestPolarity(sample),
      ...(place ? { inPlace: place.fits ? { fits: true } : place } : {}),
      ...(source.header.readings ? { readings: source.header.readings } : {}),
    };
  });
}

async function withScan<T>(path: string, options: ScanInfoOptions, use: (looked: Looked) => Promise<T>): Promise<T> {
  const source = await openScan(path, options.choice);
  try {
    const { header } = source;
    const { survey, sampled } = await surveyScan(source, options.signal);
    const { min, max } = survey.facts();
    const verdict = judgeSpacing(header);
    const info: ScanInfo = {
      family: header.family,
      name: source.name,
      bytes: source.bytes,
      size: header.size,
      spacing: verdict.spacing,
      headerSpacing: header.headerSpacing,
      unit: header.unit,
      dtype: header.dtype,
      range: { min, max, sampled },
      frame: header.frame,
      warnings: verdict.warnings,
    };
    return await use({ info, survey, source });
  } finally {
    await source.close();
  }
}

async function surveyScan(source: SliceSource, signal?: AbortSignal): Promise<{ survey: ValueSurvey; sampled: boolean }> {
  const [nx, ny, nz] = source.header.size;
  const planeBytes = nx * ny * BYTES_OF_DTYPE[source.header.dtype];
  if (!source.seekable || planeBytes * nz <= WHOLE_BYTES)
    return { survey: await surveySource(source, { signal }), sampled: false };
  const count = Math.max(3, Math.min(nz, Math.floor(WHOLE_BYTES / 2 / planeBytes)));
  const survey = new ValueSurvey(nx * ny * count);
  for (let k = 0; k < count; k++) {
    stopIfAborted(signal, "looking at the scan");
    const z = Math.round((k * (nz - 1)) / (count - 1));
    for await (const run of source.readPlanes(z, z + 1, signal)) survey.add(run.data);
  }
  return { survey, sampled: true };
}

function conversionsOf(source: SliceSource, survey: ValueSurvey, sampled: boolean): string[] {
  const { header } = source;
  const known = storedTypeOf(header.dtype);
  const sentences = [...header.notes];
  if (!known && sampled) sentences.push(undecidedSentence(header.dtype));
  else {
    const { sentence } = known ?? chooseStoredType(header.dtype, survey.facts(), source.name);
    if (sentence) sentences.push(sentence);
  }
  return sentences;
}

const SLICE_SIDE = 512;

/** The middle slice as uint8, at most 512 a side: every n-th voxel, windowed. */
async function middleSlice(
  source: SliceSource,
  window: { low: number; high: number },
  signal?: AbortSignal,
): Promise<ScanLookAnswer["slice"]> {
  const [nx, ny, nz] = source.header.size;
  const z = Math.floor(nz / 2);
  let plane: SourceArray | undefined;
  for await (const run of source.readPlanes(z, z + 1, signal)) plane = run.data;
  const step = Math.max(1, Math.ceil(Math.max(nx, ny) / SLICE_SIDE));
  const width = Math.ceil(nx / step);
  const height = Math.ceil(ny / step);
  const out = new Uint8ClampedArray(width * height); // rounds and clamps on its own
  const scale = 255 / (window.high - window.low);
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++) out[y * width + x] = (Number(plane![y * step * nx + x * step]) - window.low) * scale;
  return { width, height, data: Buffer.from(out.buffer).toString("base64") };
}
