import { afterEach, describe, expect, it, vi } from "vitest";
import { GuideFollower, type GuideSource } from "#renderer/editor/tracing/guide-follower.ts";
import type { GuidePreviewAnswer } from "#shared/api/engine.ts";
import { TautlineError } from "#shared/errors.ts";
import { type PointMm, pointMm } from "#shared/geometry/types.ts";

/** An engine that notes what it is asked and answers with a straight path. */
function fakeEngine(change: Partial<GuideSource> = {}) {
  const said: string[] = [];
  let sessions = 0;
  const source: GuideSource = {
    open: async () => {
      sessions += 1;
      said.push(`open ${sessions}`);
      return { session: `g${sessions}` };
    },
    preview: async (session, to) => {
      said.push(`preview ${session} to ${to[0]}`);
      return answerTo(to);
    },
    close: async (session) => void said.push(`close ${session}`),
    ...change,
  };
  return { said, source };
}

function answerTo(to: PointMm): GuidePreviewAnswer {
  return { points: [0, 0, 0, ...to], coarse: false, imageFit: 0.8, doubtful: [] };
}

const settle = () => new Promise((resolve) => setTimeout(resolve, 0));

describe("the guide", () => {
  afterEach(() => void vi.useRealTimers());

  it("opens one session a pin, previews to the pointer, and closes the session when the pin changes", async () => {
    const { said, source } = fakeEngine();
    const follower = new GuideFollower(source);
    follower.start(pointMm(0, 0, 0), "guide");
    await follower.point(pointMm(1, 0, 0));
    await follower.point(pointMm(2, 0, 0));
    expect(follower.guide.value?.points.at(-1)).toEqual([2, 0, 0]);
    follower.start(pointMm(2, 0, 0), "guide");
    await settle();
    await settle();
    // The two sessions know nothing of each other: only the order within each is promised.
    expect(said.filter((line) => /1$|g1/.test(line) && !line.includes("g2"))).toEqual([
      "open 1",
      "preview g1 to 1",
      "preview g1 to 2",
      "close g1",
    ]);
    expect(said.filter((line) => /open 2|g2/.test(line))).toEqual(["open 2", "preview g2 to 2"]);
  });

  it("opens a session that the engine closed for idleness once more", async () => {
    let lost = true;
    const { said, source } = fakeEngine({
      preview: async (_, to) => {
        if (lost) {
          lost = false;
          throw new TautlineError("not-found", "idle", { what: "guide", id: "g1" });
        }
        return answerTo(to);
      },
    });
    const follower = new GuideFollower(source);
    follower.start(pointMm(0, 0, 0), "guide");
    await follower.point(pointMm(1, 0, 0));
    expect(said.filter((line) => line.startsWith("open"))).toHaveLength(2);
    expect(follower.guide.value).not.toBeNull();
  });

  it("draws straight without asking when the next stretch is straight", async () => {
    const { said, source } = fakeEngine();
    const follower = new GuideFollower(source);
    follower.start(pointMm(0, 0, 0), "straight");
    await follower.point(pointMm(3, 0, 0));
    expect(said).toEqual([]);
    expect(follower.guide.value?.points).toEqual([
      [0, 0, 0],
      [3, 0, 0],
    ]);
  });

  it("shows nothing for an answer that comes after the pin changed", async () => {
    let answer!: (value: GuidePreviewAnswer) => void;
    const { source } = fakeEngine({ preview: () => new Promise((resolve) => (answer = resolve)) });
    const follower = new GuideFollower(source);
    follower.start(pointMm(0, 0, 0), "guide");
    const pointed = follower.point(pointMm(1, 0, 0));
    await settle();
    follower.start(null, "guide");
    answer(answerTo(pointMm(1, 0, 0)));
    await pointed;
    expect(follower.guide.value).toBeNull();
  });

  it("asks again, ever less often, while the pointer rests on a coarse guide, until it is fine", async () => {
    vi.useFakeTimers();
    const asked: number[] = [];
    const { source } = fakeEngine({
      preview: async (_, to) => {
        asked.push(Date.now());
        return { ...answerTo(to), coarse: asked.length < 4 };
      },
    });
    const follower = new GuideFollower(source);
    follower.start(pointMm(0, 0, 0), "guide");
    await follower.point(pointMm(1, 0, 0));
    expect(follower.guide.value?.coarse).toBe(true);
    await vi.advanceTimersByTimeAsync(10_000);
    expect(follower.guide.value?.coarse).toBe(false);
    expect(asked).toHaveLength(4);
    const pauses = asked.slice(1).map((time, i) => time - asked[i]!);
    expect(pauses).toEqual(pauses.toSorted((a, b) => a - b));
  });

  it("asks no more for a place that the pointer has left, nor from a pin that is no more", async () => {
    vi.useFakeTimers();
    const asked: number[] = [];
    const { source } = fakeEngine({
      preview: async (_, to) => {
        asked.push(to[0]);
        return { ...answerTo(to), coarse: true };
      },
    });
    const follower = new GuideFollower(source);
    follower.start(pointMm(0, 0, 0), "guide");
    await follower.point(pointMm(1, 0, 0));
    await follower.point(pointMm(2, 0, 0));
    await vi.advanceTimersByTimeAsync(500);
    expect(asked.filter((x) => x === 1)).toHaveLength(1);
    expect(asked.filter((x) => x === 2).length).toBeGreaterThan(1);
    const before = asked.length;
    follower.stop();
    await vi.advanceTimersByTimeAsync(60_000);
    expect(asked).toHaveLength(before);
    // A place that never becomes fine is not asked for without end.
    follower.start(pointMm(0, 0, 0), "guide");
    await follower.point(pointMm(3, 0, 0));
    await vi.advanceTimersByTimeAsync(600_000);
    const all = asked.length;
    await vi.advanceTimersByTimeAsync(600_000);
    expect(asked).toHaveLength(all);
  });

  it("goes away with the pointer, and on a failure", async () => {
    const { source } = fakeEngine();
    const follower = new GuideFollower(source);
    follower.start(pointMm(0, 0, 0), "guide");
    await follower.point(pointMm(1, 0, 0));
    await follower.point(null);
    expect(follower.guide.value).toBeNull();
    const failing = new GuideFollower({ ...source, preview: () => Promise.reject(new Error("no")) });
    failing.start(pointMm(0, 0, 0), "guide");
    await failing.point(pointMm(1, 0, 0));
    expect(failing.guide.value).toBeNull();
  });
});
