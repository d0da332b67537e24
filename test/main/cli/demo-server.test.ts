import { readdir } from "node:fs/promises";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { SectionHeader, SnapAnswer, SolvedCurve, ValueAnswer } from "#shared/api/engine.ts";
import { decodeFrame } from "#shared/api/frame.ts";
import { type JobState, LOST_HEADER, type ServerEvent, type ShelfAnswer, TOKEN_HEADER } from "#shared/api/routes.ts";
import type { ShelfSpecimen } from "#shared/api/specimen.ts";
import { parseChordaeBytes } from "#shared/formats/chordae/read-chordae-file.ts";
import { type Place, place, type RunningServer, startServer } from "#test/main/cli/start-server.ts";

// Everything behind the requests at once, on the demo valve: intake thread, store, engine threads, journals, export.
describe("the demo valve over the server", () => {
  let where: Place;
  let server: RunningServer;
  let demo: ShelfSpecimen;
  const jobs: JobState[] = [];
  beforeAll(async () => {
    where = await place();
    server = await startServer(where, ["--port", "0", "--grace", "600"]);
  }, 60_000);
  afterAll(async () => {
    server?.child.kill("SIGTERM");
    await server?.ended;
    await where?.remove();
  });

  it("leaves nothing when it is stopped while it is made", async () => {
    const { answer } = await server.call<{ job: string }>("POST", "/api/demo", {});
    const states: JobState[] = [];
    const ended = followJobs(server, states, answer.job);
    await expect.poll(() => states.some(({ progress }) => progress > 0), { timeout: 60_000 }).toBe(true);
    await server.call("POST", `/api/jobs/${answer.job}/cancel`, {});
    await ended;
    expect(states.at(-1)).toMatchObject({ state: "cancelled" });
    expect((await server.call<ShelfAnswer>("GET", "/api/shelf")).answer).toEqual({ specimens: [], problems: [] });
    expect(await readdir(join(where.library, "unfinished"))).toEqual([]);
  });

  const post = (path: string, body: object) =>
    fetch(server.origin + path, { method: "POST", headers: { [TOKEN_HEADER]: server.token }, body: JSON.stringify(body) });
  const ticket = (lane: string, number: number) => ({ window: "w1", lane, number });

  it("is made with progress, labelled synthetic, with three finished passes of twenty trees", async () => {
    const { answer: started } = await server.call<{ job: string }>("POST", "/api/demo", {});
    await followJobs(server, jobs, started.job);
    const { answer } = await server.call<ShelfAnswer>("GET", "/api/shelf");
    expect(answer.problems).toEqual([]);
    demo = answer.specimens[0]!;
    expect(jobs.at(-1)).toMatchObject({ what: "demo", state: "done", result: { specimen: demo.specimen.id } });
    const progress = jobs.map((job) => job.progress);
    expect(progress).toEqual([...progress].sort((a, b) => a - b));
    expect(progress.length).toBeGreaterThan(3);
    expect(demo.specimen).toMatchObject({ name: "HB-07", synthetic: true, volume: { handedness: "confirmed" } });
    expect(demo.passes.map(({ annotator, synthetic, state }) => [annotator, synthetic, state])).toEqual(
      ["AN-1", "AN-2", "AN-3"].map((annotator) => [annotator, true, "finished"]),
    );
    for (const { trees } of demo.passes) expect(trees).toBe(20);
  }, 180_000);

  it("shows a section, dark outside the scan, and the value under the pointer", async () => {
    const { volume, display } = demo.specimen;
    const [ox, oy, oz] = volume.origin;
    const step = volume.spacing[0];
    // Two columns of pixels left of the scan, the others in it, through the middle slice.
    const middle = oz + ((volume.size[2] - 1) / 2) * step;
    const origin = [ox - 2.5 * step, oy - 0.5 * step, middle];
    const plane = { origin, u: [step, 0, 0], v: [0, step, 0], width: 200, height: 100 };
    const request = {
      ticket: ticket("section", 1),
      specimen: demo.specimen.id,
      plane,
      slabMm: 0,
      slabMode: "max",
      quality: "still",
    };
    const answer = await post("/api/engine/section", { ...request, ...display });
    const { header, body } = decodeFrame<SectionHeader>(new Uint8Array(await answer.arrayBuffer()));
    expect([header.width, header.height, body.length]).toEqual([200, 100, 20_000]);
    expect(new Set([...body.filter((_, i) => i % 200 < 2)])).toEqual(new Set([0]));
    expect(new Set(body).size).toBeGreaterThan(20);
    const inside = await post("/api/engine/value", { specimen: demo.specimen.id, at: [ox, oy, oz] });
    expect((await inside.json()) as ValueAnswer).toMatchObject({ index: [0, 0, 0] });
    const outside = await post("/api/engine/value", { specimen: demo.specimen.id, at: [ox - 5, oy, oz] });
    expect(((await outside.json()) as ValueAnswer).value).toBeNull();
  });

  it("snaps, guides and solves along a string of the true trees, ending exactly at the pins", async () => {
    const { id, polarity, volume } = demo.specimen;
    const exported = await exportOf(0);
    // Two places in the middle of the longest strand.
    const strands = exported.trees.flatMap((tree) => tree.strands).filter(({ points }) => points !== undefined);
    const points = strands.reduce((a, b) => (b.points!.length > a.points!.length ? b : a)).points!;
    const from = points[Math.floor(points.length * 0.4)]!;
    const to = points[Math.floor(points.length * 0.5)]!;
    const parameters = { polarity, blurFwhmMm: volume.blurFwhmMm };
    const snap = { ticket: ticket("guide", 1), specimen: id, at: from, normal: [0, 1, 0], slabMm: 0.5, reachMm: 0.3, polarity };
    const { candidates } = (await (await post("/api/engine/snap", snap)).json()) as SnapAnswer;
    expect(candidates.length).toBeGreaterThan(0);
    const opened = await post("/api/engine/guide/open", { ticket: ticket("guide", 2), specimen: id, from, parameters });
    const { session } = (await opened.json()) as { session: string };
    const preview = await post("/api/engine/guide/preview", { ticket: ticket("guide", 3), session, to });
    expect(((await preview.json()) as { points: number[] }).points.length).toBeGreaterThanOrEqual(6);
    await post("/api/engine/guide/close", { session });
    const request = { ticket: ticket("job", 1), specimen: id, strands: [{ from, via: [], to }], parameters };
    const { curves } = (await (await post("/api/engine/solve", request)).json()) as { curves: SolvedCurve[] };
    const curve = curves[0]!;
    expect(curve.followed).toBe(true);
    expect(curve.points.slice(0, 3)).toEqual([...from]);
    expect(curve.points.slice(-3)).toEqual([...to]);
  });

  it("exports each annotator's trees with the scan's hash, as bytes that read back", async () => {
    for (const [i, pass] of demo.passes.entries()) {
      const file = await exportOf(i);
      expect([file.annotator, file.trees.length]).toEqual([pass.annotator, 20]);
      expect(file.volume!.sha256).toBe(demo.specimen.volume.sha256);
    }
  });

  it("exports every other format too, the labels on the scan's own grid", async () => {
    for (const [format, begins] of [
      ["graphml", "<?xml"],
      ["vtp", "<?xml"],
      ["tables", "PK"],
      ["labels", "NRRD"],
    ] as const) {
      const answer = await post("/api/export", { specimen: demo.specimen.id, pass: demo.passes[0]!.id, format });
      const bytes = new Uint8Array(await answer.arrayBuffer());
      expect([format, answer.status, new TextDecoder().decode(bytes.subarray(0, begins.length))]).toEqual([format, 200, begins]);
      expect(JSON.parse(decodeURIComponent(answer.headers.get(LOST_HEADER)!)).length).toBeGreaterThan(0);
      if (format === "labels")
        expect(new TextDecoder().decode(bytes.subarray(0, 2000))).toContain(`sizes: ${demo.specimen.volume.size.join(" ")}`);
    }
  });

  it("is opened again at once, and removed without a question", async () => {
    const { answer } = await server.call<{ job: string }>("POST", "/api/demo", {});
    const ended: JobState[] = [];
    await followJobs(server, ended, answer.job);
    expect(ended.at(-1)).toMatchObject({ state: "done", result: { specimen: demo.specimen.id } });
    expect((await server.call("DELETE", `/api/specimens/${demo.specimen.id}`, {})).status).toBe(200);
    const { answer: shelf } = await server.call<ShelfAnswer>("GET", "/api/shelf");
    expect(shelf).toEqual({ specimens: [], problems: [] });
  });

  async function exportOf(index: number) {
    const answer = await post("/api/export", { specimen: demo.specimen.id, pass: demo.passes[index]!.id, format: "chordae" });
    return parseChordaeBytes(new Uint8Array(await answer.arrayBuffer()), "export");
  }
});

/** Collects the states of jobs until one has ended (the named one, where one is named). */
async function followJobs({ origin, token }: RunningServer, states: JobState[], job?: string): Promise<void> {
  const stop = new AbortController();
  const answer = await fetch(`${origin}/api/events?window=follower`, { headers: { [TOKEN_HEADER]: token }, signal: stop.signal });
  let rest = "";
  try {
    for await (const piece of answer.body!.pipeThrough(new TextDecoderStream()) as unknown as AsyncIterable<string>) {
      const lines = (rest + piece).split("\n");
      rest = lines.pop()!;
      for (const line of lines) {
        const event = JSON.parse(line) as ServerEvent;
        if (event.event !== "job" || (job !== undefined && event.job.id !== job)) continue;
        states.push(event.job);
        if (event.job.state !== "running") return;
      }
    }
  } finally {
    stop.abort();
  }
}
