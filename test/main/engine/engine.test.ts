import { existsSync, truncateSync } from "node:fs";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { afterAll, afterEach, beforeAll, describe, expect, test } from "vitest";
import { createEngine, type EngineOptions, type LocalEngine } from "#main/engine/engine.ts";
import type { Lane, SectionRequest, SolveRequest, Ticket } from "#shared/api/engine.ts";
import { type ErrorTag, isTautlineError, TautlineError } from "#shared/errors.ts";
import { type PointMm, pointMm } from "#shared/geometry/types.ts";
import { bricksOf } from "#shared/volume/bricks.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { scanHistogram } from "#shared/volume/scan-histogram.ts";
import { section } from "#shared/volume/section.ts";
import { film, strip } from "#shared/volume/strip.ts";
import { surfacePoints } from "#shared/volume/surface-points.ts";
import { valueAt } from "#shared/volume/value-at.ts";
import { scratchFolder, seeded, type TestSpecimen, writeSpecimen, writeVastSpecimen } from "#test/main/engine/write-store.ts";

// Threads run the built worker (`npm run build`): Node 20 does not load TypeScript in a worker.
const dist = process.env.TAUTLINE_DIST
  ? pathToFileURL(`${process.env.TAUTLINE_DIST}/`)
  : new URL("../../../dist/", import.meta.url);
const workerUrl = new URL("main/engine-worker.mjs", dist);

const SIZE = [160, 140, 120] as const;
const SPACING = 0.04;
const MIB = 2 ** 20;

/** A string that winds along x, 0.36 mm thick, bright on noise. */
function windingString(x: number): PointMm {
  return pointMm(x * SPACING, (70 + 25 * Math.sin(x / 30)) * SPACING, (60 + 20 * Math.cos(x / 40)) * SPACING);
}

function scan(): Uint16Array {
  const [nx, ny, nz] = SIZE;
  const random = seeded(3);
  const voxels = new Uint16Array(nx * ny * nz);
  for (let n = 0; n < voxels.length; n++) voxels[n] = 1000 + 200 * random();
  for (let x = 0; x < nx; x++) {
    const [, cy, cz] = windingString(x).map((value) => value / SPACING) as [number, number, number];
    for (let z = Math.floor(cz - 5); z <= cz + 5; z++)
      for (let y = Math.floor(cy - 5); y <= cy + 5; y++)
        if (Math.hypot(y - cy, z - cz) < 4.5) voxels[(z * ny + y) * nx + x] = 3000;
  }
  return voxels;
}

// Generous: tests share few cores, and ridge tiles are computed for real.
describe("The engine over worker threads", { timeout: 240_000 }, () => {
  const grid = plainGrid(SIZE, [SPACING, SPACING, SPACING]);
  const voxels = scan();
  const inMemory = bricksOf(memoryPyramid(grid, voxels));
  let scratch: ReturnType<typeof scratchFolder>;
  let specimen: TestSpecimen;
  let vast: TestSpecimen;
  let engine: LocalEngine | null = null;

  beforeAll(() => {
    if (!existsSync(workerUrl)) throw new Error("dist/main/engine-worker.mjs is missing: run `npm run build` first");
    scratch = scratchFolder();
    specimen = writeSpecimen(scratch.path, "hb-07", grid, voxels);
    vast = writeVastSpecimen(scratch.path, "vast", plainGrid([1024, 1024, 768], [0.02, 0.02, 0.02]));
  });
  afterEach(async () => {
    await engine?.close();
    engine = null;
  });
  afterAll(() => scratch.remove());

  function start(options: Partial<EngineOptions> = {}): LocalEngine {
    const library = async (id: string) => {
      if (id === "hb-07") return specimen;
      if (id === "vast") return vast;
      throw new TautlineError("not-found", "There is no specimen with this id.", { what: "specimen", id });
    };
    engine = createEngine({ library, workerUrl, workers: 2, cacheBytes: 128 * MIB, ...options });
    return engine;
  }

  let numbers = 0;
  const ticket = (lane: Lane = "section", window = "w1"): Ticket => ({ window, lane, number: ++numbers });

  function plane(seed: number, width = 120, height = 100): SectionRequest["plane"] {
    const random = seeded(seed);
    const near = (size: number) => size * SPACING * (0.2 + 0.6 * random());
    const middle = [near(SIZE[0]), near(SIZE[1]), near(SIZE[2])] as const;
    const [a, b] = [random() * 6, random() * 6];
    const u = [0.02 * Math.cos(a), 0.02 * Math.sin(a), 0] as const;
    const v = [-0.02 * Math.sin(a) * Math.cos(b), 0.02 * Math.cos(a) * Math.cos(b), 0.02 * Math.sin(b)] as const;
    const at = (c: 0 | 1 | 2) => middle[c] - (width / 2) * u[c] - (height / 2) * v[c];
    return { origin: pointMm(at(0), at(1), at(2)), u, v, width, height };
  }

  function sectionRequest(seed: number, changes: Partial<SectionRequest> = {}): SectionRequest {
    return {
      ticket: ticket(),
      specimen: "hb-07",
      plane: plane(seed),
      slabMm: 0,
      slabMode: "max",
      low: 900,
      high: 3000,
      quality: "still",
      ...changes,
    };
  }

  /** Work of seconds: a thick slab of many pixels. */
  const heavy = (changes: Partial<SectionRequest> = {}) =>
    sectionRequest(1, { plane: plane(1, 3000, 3000), slabMm: 4, slabMode: "mean", ...changes });

  async function tagOf(work: Promise<unknown>): Promise<ErrorTag | "answered"> {
    try {
      await work;
      return "answered";
    } catch (error) {
      if (isTautlineError(error)) return error.tag;
      throw error;
    }
  }

  /** Resolves when nothing is queued or running. */
  async function quiet(): Promise<{ waiting: number; running: number; pinned: number }> {
    for (;;) {
      const figures = await engine!.figures();
      if (figures.waiting === 0 && figures.running === 0) return figures;
      await new Promise((resolve) => setTimeout(resolve, 5));
    }
  }

  const tracing = { polarity: "bright", blurFwhmMm: null } as const;

  test("answers a section with the same pixels as the kernel over the scan in memory", async () => {
    start();
    for (const seed of [1, 2, 3]) {
      const request = sectionRequest(seed, { slabMm: seed === 3 ? 0.2 : 0 });
      const { header, body } = await engine!.section(request);
      expect(header).toEqual({ dtype: "uint8", width: 120, height: 100, plane: request.plane, level: 0 });
      expect(Buffer.compare(body, section(inMemory, request).body)).toBe(0);
    }
  });

  test("answers values, histogram, surface, strip and film as the kernels do over the scan in memory", async () => {
    start();
    const points = [10, 40, 80].flatMap((x) => [...windingString(x)]);
    const shown = { ticket: ticket("space"), specimen: "hb-07", points, low: 900, high: 3000, halfWidthMm: 0.5 } as const;
    const onStrip = { ...shown, width: 40, height: 90, turn: 20 };
    const onFilm = { ...shown, count: 6, side: 24 };
    const onSurface = { ticket: ticket("space"), specimen: "hb-07", limit: 500, polarity: "bright" } as const;
    expect(await engine!.strip(onStrip)).toEqual(strip(inMemory, onStrip));
    expect(await engine!.film(onFilm)).toEqual(film(inMemory, onFilm));
    expect(await engine!.surface(onSurface)).toEqual(surfacePoints(inMemory, onSurface));
    expect(await engine!.value("hb-07", windingString(50))).toEqual(valueAt(inMemory, windingString(50)));
    expect(await engine!.histogram("hb-07")).toEqual(scanHistogram(inMemory, specimen.record.volume.range));
  });

  test("many workers at once over a cache of few slots: every picture right, slots reused, nothing pinned afterwards", async () => {
    // 86 slots for four workers; the scan has 100 bricks and the vast one far more.
    start({ workers: 4, cacheBytes: 14 * MIB });
    const asked = Array.from({ length: 60 }, (_, n) =>
      sectionRequest(n % 12, { ticket: ticket("job"), slabMm: n % 5 === 0 ? 0.3 : 0, plane: plane(n % 12, 200, 180) }),
    );
    const filler = Array.from({ length: 20 }, (_, n) =>
      engine!.section(
        sectionRequest(n, {
          ticket: ticket("job"),
          specimen: "vast",
          plane: { ...plane(n, 300, 300), origin: pointMm(n, n / 2, 5) },
        }),
      ),
    );
    const answers = await Promise.all(asked.map((request) => engine!.section(request)));
    await Promise.all(filler);
    answers.forEach(({ body }, n) => {
      expect(Buffer.compare(body, section(inMemory, asked[n]!).body)).toBe(0);
    });
    const figures = await engine!.figures();
    expect(figures.evictions).toBeGreaterThan(100);
    expect(figures.used).toBeLessThanOrEqual(figures.slots);
    expect(figures.slots * 65_536).toBeLessThanOrEqual(0.45 * 14 * MIB);
    await quiet();
    expect((await engine!.figures()).pinned).toBe(0);
  });

  test("workers that need the same bricks at the same time load each of them once", async () => {
    start({ workers: 2 });
    await engine!.section(sectionRequest(7, { plane: plane(7, 400, 400) }));
    await quiet();
    const alone = (await engine!.figures()).loads;
    await engine!.close();
    start({ workers: 6, cacheBytes: 256 * MIB });
    const same = Array.from({ length: 24 }, () => sectionRequest(7, { plane: plane(7, 400, 400), ticket: ticket("job") }));
    await Promise.all(same.map((request) => engine!.section(request)));
    await quiet();
    const figures = await engine!.figures();
    expect(alone).toBeGreaterThan(20);
    expect(figures.loads).toBe(alone);
    expect(figures.evictions).toBe(0);
  });

  test("stays under its limit in real resident memory while far more than the limit is read", async () => {
    const limit = 96 * MIB;
    start({ cacheBytes: limit });
    const across = (n: number): Promise<unknown> =>
      engine!.section(
        sectionRequest(n, {
          ticket: ticket("job"),
          specimen: "vast",
          plane: { origin: pointMm(0, 0, 0.02 + 0.3 * n), u: [0.02, 0, 0.001], v: [0, 0.02, 0.002], width: 1024, height: 1024 },
        }),
      );
    await across(0);
    await quiet();
    const before = process.memoryUsage().rss;
    let highest = before;
    for (let n = 1; n < 24; n++) {
      await across(n);
      highest = Math.max(highest, process.memoryUsage().rss);
    }
    const figures = await engine!.figures();
    const read = figures.loads * 65_536;
    console.log(
      `brick cache: read ${Math.round(read / MIB)} MiB under a limit of 96 MiB, resident +${Math.round((highest - before) / MIB)} MiB`,
    );
    expect(read).toBeGreaterThan(8 * limit);
    expect(highest - before).toBeLessThan(limit);
  });

  test("a newer request of a line drops the older ones with `superseded`, and nothing stays queued", async () => {
    start();
    const requests = Array.from({ length: 40 }, (_, n) => sectionRequest(n % 6));
    const tags = await Promise.all(requests.map((request) => tagOf(engine!.section(request))));
    expect(tags.at(-1)).toBe("answered");
    expect(tags.filter((tag) => tag === "superseded").length).toBeGreaterThanOrEqual(38);
    expect(await quiet()).toMatchObject({ waiting: 0, running: 0, pinned: 0 });
  });

  test("running work is dropped at once and stops, so that the newer answer does not wait for its end", async () => {
    start();
    const order: string[] = [];
    const old = tagOf(engine!.section(heavy())).then((tag) => order.push(`old ${tag}`));
    await new Promise((resolve) => setTimeout(resolve, 30));
    const next = tagOf(engine!.section(sectionRequest(2))).then((tag) => order.push(`new ${tag}`));
    await Promise.all([old, next]);
    expect(order).toEqual(["old superseded", "new answered"]);
    expect(await quiet()).toMatchObject({ pinned: 0 });
  });

  test("a request that comes after a newer one under way is dropped itself; after that one's end it is answered", async () => {
    start();
    const late = ticket();
    const newer = engine!.section(sectionRequest(1, { ticket: ticket() }));
    expect(await tagOf(engine!.section(sectionRequest(2, { ticket: late })))).toBe("superseded");
    await newer;
    expect(await tagOf(engine!.section(sectionRequest(2, { ticket: late })))).toBe("answered");
  });

  test("other windows, other kinds of request and the lane `job` drop nothing", async () => {
    start();
    const points = [10, 40, 80].flatMap((x) => [...windingString(x)]);
    const shown = { specimen: "hb-07", points, low: 900, high: 3000, halfWidthMm: 0.5 } as const;
    const tags = await Promise.all(
      [
        engine!.section(sectionRequest(1, { ticket: ticket("section", "w1") })),
        engine!.section(sectionRequest(1, { ticket: ticket("section", "w2") })),
        engine!.strip({ ...shown, ticket: ticket("section", "w1"), width: 40, height: 90, turn: 0 }),
        engine!.film({ ...shown, ticket: ticket("section", "w1"), count: 5, side: 20 }),
        engine!.section(sectionRequest(2, { ticket: ticket("job") })),
        engine!.section(sectionRequest(3, { ticket: ticket("job") })),
        engine!.value("hb-07", windingString(30)),
      ].map(tagOf),
    );
    expect(tags).toEqual(new Array(7).fill("answered"));
  });

  test("a worker that dies fails its request with `internal`, is started again, and leaves no pin behind", async () => {
    start();
    const before = sectionRequest(4);
    await engine!.section(before);
    const doomed = tagOf(engine!.section(heavy({ ticket: ticket("job") })));
    await new Promise((resolve) => setTimeout(resolve, 40));
    await engine!.kill(1);
    expect(await doomed).toBe("internal");
    const { body } = await engine!.section(before);
    expect(Buffer.compare(body, section(inMemory, before).body)).toBe(0);
    expect(await quiet()).toMatchObject({ pinned: 0 });
  });

  test("workers killed again and again in the middle of loading leave a cache that still gives right pictures", async () => {
    start({ workers: 4, cacheBytes: 14 * MIB });
    const random = seeded(8);
    for (let round = 0; round < 6; round++) {
      const asked = Array.from({ length: 12 }, (_, n) => sectionRequest(n, { ticket: ticket("job") }));
      const work = Promise.all(asked.map((request) => engine!.section(request).catch((error: unknown) => error)));
      await new Promise((resolve) => setTimeout(resolve, 15 * random()));
      await engine!.kill(2 + (round % 2));
      (await work).forEach((answer, n) => {
        if (isTautlineError(answer)) expect(answer.tag).toBe("internal");
        else expect(Buffer.compare((answer as { body: Uint8Array }).body, section(inMemory, asked[n]!).body)).toBe(0);
      });
      // A finished task between two deaths: a worker that only ever dies is given up.
      for (let n = 0; n < 4; n++) await engine!.section(sectionRequest(n, { ticket: ticket("job") }));
    }
    expect(await quiet()).toMatchObject({ pinned: 0 });
  });

  test("a guide session previews along the string, survives its worker's death, and ends when it is closed", async () => {
    start();
    const { session } = await engine!.openGuide({
      ticket: ticket("guide"),
      specimen: "hb-07",
      from: windingString(20),
      parameters: tracing,
    });
    const preview = (x: number) => engine!.previewGuide({ ticket: ticket("guide"), session, to: windingString(x) });
    const settled = async (x: number) => {
      for (;;) {
        const answer = await preview(x);
        if (!answer.coarse) return answer;
        await new Promise((resolve) => setTimeout(resolve, 20));
      }
    };
    const near = await settled(45);
    expect(near.points.slice(0, 3)).toEqual([...windingString(20)].map((value) => Math.round(value * 1e6) / 1e6));
    expect(near.points.slice(-3)).toEqual([...windingString(45)].map((value) => Math.round(value * 1e6) / 1e6));
    for (let n = 0; n < near.points.length; n += 3) {
      const x = near.points[n]! / SPACING;
      const [, y, z] = windingString(x);
      // Inside the string: its radius is 0.18 mm.
      expect(Math.hypot(near.points[n + 1]! - y, near.points[n + 2]! - z)).toBeLessThan(0.18);
    }
    expect(near.imageFit).toBeGreaterThan(0.8);
    await engine!.kill(0);
    expect((await settled(45)).points).toEqual(near.points);
    await engine!.closeGuide(session);
    expect(await tagOf(preview(45))).toBe("not-found");
  });

  test("snaps to the string under the pointer and tells its depth", async () => {
    start();
    const [x, y, z] = windingString(80);
    const { candidates } = await engine!.snap({
      ticket: ticket("guide"),
      specimen: "hb-07",
      at: pointMm(x, y + 0.08, z - 0.2),
      normal: [0, 0, 1],
      slabMm: 0.8,
      reachMm: 0.2,
      polarity: "bright",
    });
    expect(candidates.length).toBe(1);
    const [best] = candidates;
    expect(Math.hypot(best!.point[1] - y, best!.point[2] - z)).toBeLessThan(0.08);
    expect(best!.depthMm).toBeCloseTo(best!.point[2] - (z - 0.2), 6);
    expect(best!.strength).toBeGreaterThan(0.5);
  });

  test("solves a strand to the same curve whatever was asked before", async () => {
    start();
    const request: Omit<SolveRequest, "ticket"> = {
      specimen: "hb-07",
      strands: [{ from: windingString(15), via: [], to: windingString(90) }],
      parameters: tracing,
    };
    const first = await engine!.solve({ ...request, ticket: ticket("job") });
    await engine!.openGuide({ ticket: ticket("guide"), specimen: "hb-07", from: windingString(50), parameters: tracing });
    expect(await engine!.solve({ ...request, ticket: ticket("job") })).toEqual(first);
    expect(first.curves[0]!.followed).toBe(true);
    expect(first.curves[0]!.points.slice(0, 3)).toEqual([...windingString(15)]);
  });

  test("refuses what it cannot do with `bad-request` and what is not there with `not-found`, and goes on", async () => {
    start();
    const bad: Promise<unknown>[] = [
      engine!.section(sectionRequest(1, { plane: { ...plane(1), width: 5000 } })),
      engine!.section(sectionRequest(1, { plane: { ...plane(1), u: [Number.NaN, 0, 0] } })),
      engine!.section(sectionRequest(1, { plane: { ...plane(1), u: [1, 0, 0], v: [2, 0, 0] } })),
      engine!.section(sectionRequest(1, { slabMm: Number.POSITIVE_INFINITY })),
      engine!.section(sectionRequest(1, { ticket: { window: "w", lane: "section", number: 1.5 } })),
      engine!.film({
        ticket: ticket(),
        specimen: "hb-07",
        points: [0, 0, 0],
        count: 1,
        side: 8,
        halfWidthMm: 1,
        low: 0,
        high: 1,
      }),
      engine!.openGuide({ ticket: ticket("guide"), specimen: "hb-07", from: pointMm(-50, 0, 0), parameters: tracing }),
      engine!.value("hb-07", pointMm(Number.NaN, 0, 0)),
      engine!.solve({
        ticket: ticket("job"),
        specimen: "hb-07",
        strands: [{ from: windingString(1), via: [], to: pointMm(99, 0, 0) }],
        parameters: tracing,
      }),
    ];
    expect(await Promise.all(bad.map(tagOf))).toEqual(new Array(bad.length).fill("bad-request"));
    expect(await tagOf(engine!.section(sectionRequest(1, { specimen: "unknown" })))).toBe("not-found");
    const session = "never opened";
    expect(await tagOf(engine!.previewGuide({ ticket: ticket("guide"), session, to: windingString(3) }))).toBe("not-found");
    expect(await tagOf(engine!.section(sectionRequest(1)))).toBe("answered");
  });

  test("a damaged store gives `unreadable-input`; forgotten and made again it is read anew", async () => {
    start();
    const damaged = writeSpecimen(scratch.path, "damaged", grid, voxels);
    truncateSync(join(damaged.folder, "scan.ome.zarr", "0", "c", "0", "0", "0"), 100);
    await engine!.close();
    engine = createEngine({ library: async () => damaged, workerUrl, workers: 2, cacheBytes: 64 * MIB });
    const request = sectionRequest(1);
    expect(await tagOf(engine.section(request))).toBe("unreadable-input");
    writeSpecimen(
      scratch.path,
      "damaged",
      grid,
      voxels.map((value) => value + 100),
    );
    await engine.forget("hb-07");
    const { body } = await engine.section({ ...request, low: 1000, high: 3100 });
    expect(Buffer.compare(body, section(inMemory, request).body)).toBe(0);
  });

  test("says `internal` when its worker cannot be started, instead of waiting for ever", async () => {
    start({ workerUrl: new URL("./no-such-worker.mjs", import.meta.url) });
    const tags = await Promise.all([1, 2].map((n) => tagOf(engine!.section(sectionRequest(n, { ticket: ticket("job") })))));
    expect(tags).toEqual(["internal", "internal"]);
    expect(await tagOf(engine!.histogram("hb-07"))).toBe("internal");
  });

  test("answers what is under way with `cancelled` when it closes", async () => {
    start();
    const work = [heavy({ ticket: ticket("job") }), heavy({ ticket: ticket("job") })].map((request) =>
      tagOf(engine!.section(request)),
    );
    await new Promise((resolve) => setTimeout(resolve, 20));
    await engine!.close();
    expect(await Promise.all(work)).toEqual(["cancelled", "cancelled"]);
    expect(await tagOf(engine!.section(sectionRequest(1)))).toBe("cancelled");
  });
});
