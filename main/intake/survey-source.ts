import { stopIfAborted } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { ValueSurvey } from "#shared/volume/value-survey.ts";

/** Looks at every value of a scan, in order. */
export async function surveySource(
  source: SliceSource,
  how: { signal?: AbortSignal | undefined; onSlices?: (done: number) => void } = {},
): Promise<ValueSurvey> {
  const [nx, ny, nz] = source.header.size;
  const survey = new ValueSurvey(nx * ny * nz);
  let done = 0;
  for await (const run of source.readPlanes(0, nz, how.signal)) {
    stopIfAborted(how.signal, "looking at the scan");
    survey.add(run.data);
    done += run.count;
    how.onSlices?.(done);
  }
  return survey;
}
