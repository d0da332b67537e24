import { readFileSync } from "node:fs";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { pyramidLevels } from "#shared/volume/pyramid.ts";

type Place = readonly number[];

/** Asks a running program; the path is that of a route under `/api/`. */
export type Ask = (path: string, body: object) => Promise<{ readonly status: number; readonly answer: unknown }>;

/** One kind of work for an engine. */
export interface Demand {
  readonly name: string;
  run(): Promise<void>;
}

/** Bytes of a process' memory that are resident: now, and the most since it began. Linux alone tells (VmRSS, VmHWM). */
export function residentOf(pid: number): { now: number; most: number } {
  const text = readFileSync(`/proc/${pid}/status`, "utf8");
  const bytes = (key: string) => 1024 * Number(new RegExp(`^${key}:\\s+(\\d+) kB`, "m").exec(text)?.[1]);
  return { now: bytes("VmRSS"), most: bytes("VmHWM") };
}

/** Turn about z and tilt about the row's axis of the planes asked for: the three axes' and two oblique ones. */
const ANGLES = [
  [0, 0],
  [0, Math.PI / 2],
  [Math.PI / 2, Math.PI / 2],
  [0.5, 0.7],
  [1.1, 1.2],
] as const;

/** All that an engine can be asked over a valve whose true trees are known, the largest demands of each kind among it. */
export function allDemands(ask: Ask, record: SpecimenRecord, truth: ChordaeFile): Demand[] {
  const { volume } = record;
  const shown = { specimen: record.id, low: record.display.low, high: record.display.high };
  const parameters = { polarity: "bright", blurFwhmMm: null };
  let number = 0;
  const of = (lane: string) => ({ specimen: record.id, ticket: { window: "w1", lane, number: ++number } });
  const must = async (path: string, body: object): Promise<unknown> => {
    const { status, answer } = await ask(`engine/${path}`, body);
    if (status !== 200) throw new Error(`${path} answered ${status}: ${JSON.stringify(answer)}`);
    return answer;
  };

  const extent = volume.size.map((side, axis) => side * volume.spacing[axis]!);
  const strands = truth.trees.flatMap((tree) => tree.strands.map((strand) => strand.points ?? []));
  const longest = strands.sort((a, b) => b.length - a.length).slice(0, 10);
  const middles = longest.map((points) => points[points.length >> 1]!);
  const nodes = truth.trees.flatMap((tree) => tree.nodes.map((node) => node.position));
  const away = (a: Place, b: Place) => Math.hypot(...a.map((c, k) => c - b[k]!));
  const farthest = (from: Place) => nodes.reduce((best, node) => (away(node, from) > away(best, from) ? node : best));

  const plane = (pixel: number, [turn, tilt]: readonly [number, number], offMm: number, slabMm: number) => {
    const side = Math.min(1400, Math.ceil(extent[0]! / pixel));
    const u = [Math.cos(turn), Math.sin(turn), 0].map((c) => c * pixel);
    const v = [-Math.sin(turn) * Math.cos(tilt), Math.cos(turn) * Math.cos(tilt), Math.sin(tilt)].map((c) => c * pixel);
    const normal = [Math.sin(turn) * Math.sin(tilt), -Math.cos(turn) * Math.sin(tilt), Math.cos(tilt)];
    const origin = normal.map((n, k) => volume.origin[k]! + extent[k]! / 2 + offMm * n - (side / 2) * (u[k]! + v[k]!));
    const how = { slabMm, slabMode: "max", quality: "still", plane: { origin, u, v, width: side, height: side } };
    return must("section", { ...of("section"), ...shown, ...how });
  };
  const planes = pyramidLevels(volume).map(({ level, spacing }): Demand => {
    return {
      name: `planes of level ${level} at all angles`,
      async run() {
        const pixel = Math.min(...spacing) * 1.0001;
        for (const angle of ANGLES) for (const share of [-0.2, 0.1]) await plane(pixel, angle, share * extent[2]!, 0);
        await plane(pixel, ANGLES[3], 0, 0.4);
      },
    };
  });

  const views: Demand = {
    name: "strips, films, values, histogram, surface",
    async run() {
      for (const points of longest.slice(0, 4)) {
        const curve = { ...shown, points: points.flat(), halfWidthMm: 1.5 };
        await must("strip", { ...of("section"), ...curve, width: 300, height: 900, turn: 30 });
        await must("film", { ...of("section"), ...curve, count: 60, side: 80 });
      }
      for (const at of middles) await must("value", { specimen: record.id, at });
      await must("histogram", { specimen: record.id });
      await must("surface", { ...of("space"), limit: 200_000, polarity: "bright" });
    },
  };
  const ridges: Demand = {
    name: "ridges around places far apart",
    async run() {
      for (const at of [...middles, ...nodes.filter((_, n) => n % 10 === 0)])
        await must("snap", { ...of("guide"), at, normal: [0, 0, 1], slabMm: 2, reachMm: 0.4, polarity: "bright" });
    },
  };
  const guides: Demand = {
    name: "guides across the valve, each left to grow",
    async run() {
      for (const from of middles.slice(0, 2)) {
        const { session } = (await must("guide/open", { ...of("guide"), from, parameters })) as { session: string };
        const far = farthest(from);
        for (let n = 1; n <= 8; n++) {
          const to = from.map((c, k) => c + (far[k]! - c) * (n / 8));
          await must("guide/preview", { ticket: of("guide").ticket, session, to });
        }
        await new Promise((resolve) => setTimeout(resolve, 2500));
      }
    },
  };
  const follows: Demand = {
    name: "a search of the whole scan begun; strings followed beside it",
    async run() {
      await ask(`specimens/${record.id}/search`, { polarity: "bright" });
      for (const at of middles.slice(0, 1)) {
        const { session } = (await must("follow/open", { ...of("job"), at, parameters })) as { session: string };
        for (let turn = 0; turn < 12; turn++) {
          const { done } = (await must("follow/more", { ticket: of("job").ticket, session })) as { done: boolean };
          if (done) break;
        }
        await ask("engine/follow/close", { session });
      }
    },
  };
  const solves: Demand = {
    name: "beside the search: solves from end to end, and between places that no string joins",
    async run() {
      const pairs = [...longest.slice(0, 1).map((points) => [points[0]!, points.at(-1)!]), [middles[0]!, farthest(middles[0]!)]];
      for (const [from, to] of pairs) await must("solve", { ...of("job"), parameters, strands: [{ from, via: [], to }] });
    },
  };
  return [...planes, views, ridges, guides, follows, solves];
}
