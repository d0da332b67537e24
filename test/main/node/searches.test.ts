import { describe, expect, it } from "vitest";
import { Jobs } from "#main/node/jobs.ts";
import { Searches } from "#main/node/searches.ts";
import type { Engine } from "#shared/api/engine.ts";
import { findStretches } from "#shared/tracing/overlooked/find-stretches.ts";
import { searchBlock, searchLevel } from "#shared/tracing/overlooked/search-block.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { putSpecimen, SPECIMEN, sampleLibrary } from "#test/main/node/sample-library.ts";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";
import { drawTubes, line } from "#test/shared/tracing/tube-phantom.ts";

// A scan of eight blocks with one string, searched in this thread by the kernels that the engine's workers call.
const S = 0.08;
const phantom = drawTubes([128, 128, 80], [S, S, S], [{ points: line([1, 2, 1], [8, 7, 5]), radius: () => 0.2 }], {
  fwhmMm: 0.14,
});
const context = createTraceContext(memoryPyramid(phantom.grid, phantom.voxels), "bright");
const FILE = `/library/specimens/${SPECIMEN}/search-bright.jsonl`;

/** A library over `files` with searches over it; `before` is called with each block that is to be searched. */
async function desk(files: UnsyncedFiles, before: (block: number) => void = () => {}) {
  const { library } = sampleLibrary(files);
  if (!(await files.facts(library.layout.specimenFile(SPECIMEN)))) await putSpecimen(files, library);
  const searched: number[] = [];
  const engine = {
    searchLevel: async () => context.pyramid.levels[searchLevel(context.pyramid)]!,
    searchBlock: async (_: string, __: string, block: number) => {
      before(block);
      searched.push(block);
      return searchBlock(context, block);
    },
    stretches: async ({ found, lines, minimumMm }) => findStretches(context, found, lines, { minimumMm }),
    endSearch: () => {},
  } satisfies Partial<Engine> as unknown as Engine;
  let ids = 0;
  const jobs = new Jobs({ now: () => 5, newId: () => `job${++ids}`, emit: () => {}, onFault: () => {} });
  const searches = new Searches({ library, files, engine, jobs, now: () => 5, mayWrite: async () => {} });
  return { library, jobs, searches, searched };
}

async function passOf(library: Awaited<ReturnType<typeof desk>>["library"]): Promise<string> {
  return (await library.createPass(SPECIMEN, "AN-1")).id;
}

describe("the search of a scan", () => {
  it("that was stopped and begun again after a restart finds what an uninterrupted one finds, no block twice", async () => {
    const whole = await desk(new UnsyncedFiles());
    await whole.searches.start(SPECIMEN, { polarity: "bright" });
    await whole.jobs.idle();
    const request = { specimen: SPECIMEN, polarity: "bright" } as const;
    const expected = await whole.searches.overlooked({ ...request, pass: await passOf(whole.library) });
    expect(expected.stretches).toHaveLength(1);
    expect(expected.search).toEqual({ polarity: "bright", done: 8, total: 8, job: null });

    const files = new UnsyncedFiles();
    let stop = () => {};
    const first = await desk(files, (block) => block === 2 && stop());
    const { job } = await first.searches.start(SPECIMEN, { polarity: "bright" });
    stop = () => first.jobs.cancel(job);
    await first.jobs.idle();
    expect(first.jobs.states()[0]!.state).toBe("cancelled");
    expect(first.searched.length).toBeLessThan(8);
    await first.searches.close();

    const second = await desk(files);
    await second.searches.start(SPECIMEN, { polarity: "bright" });
    await second.jobs.idle();
    expect([...first.searched, ...second.searched].sort((a, b) => a - b)).toEqual([0, 1, 2, 3, 4, 5, 6, 7]);
    const answer = await second.searches.overlooked({ ...request, pass: await passOf(second.library) });
    expect(answer).toEqual(expected);
  });

  it("is one job, however often it is started, and searches only the blocks of a region when one is given", async () => {
    const { searches, jobs, searched } = await desk(new UnsyncedFiles());
    const region = { from: [0.1, 0.1, 0.1], to: [0.2, 0.2, 6] } as never;
    const { job } = await searches.start(SPECIMEN, { polarity: "bright", region });
    expect(await searches.start(SPECIMEN, { polarity: "bright" })).toEqual({ job });
    await jobs.idle();
    expect(searched.sort((a, b) => a - b)).toEqual([0, 4]);
  });

  it("goes on after the last whole line of a torn file, and begins anew when the file is of another scan", async () => {
    const files = new UnsyncedFiles();
    const first = await desk(files);
    await first.searches.start(SPECIMEN, { polarity: "bright" });
    await first.jobs.idle();
    await first.searches.close();
    const bytes = (await files.read(FILE))!;
    const put = async (content: Uint8Array) => {
      await files.remove(FILE);
      await files.create(FILE, content);
    };
    await put(bytes.slice(0, bytes.length - 5));
    const torn = await desk(files);
    await torn.searches.start(SPECIMEN, { polarity: "bright" });
    await torn.jobs.idle();
    expect(torn.searched).toHaveLength(1);
    await torn.searches.close();
    await put(new TextEncoder().encode(new TextDecoder().decode(bytes).replace(/"sha256":"[^"]*"/, '"sha256":"0"')));
    const other = await desk(files);
    await other.searches.start(SPECIMEN, { polarity: "bright" });
    await other.jobs.idle();
    expect(other.searched).toHaveLength(8);
  });
});
