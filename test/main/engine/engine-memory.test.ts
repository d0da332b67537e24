import { mkdir } from "node:fs/promises";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { DEFAULT_MEMORY_MB } from "#main/engine/memory-plan.ts";
import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import { makeSpecimen } from "#main/intake/make-specimen.ts";
import { TOKEN_HEADER } from "#shared/api/routes.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { valvePhantom } from "#shared/phantom/demo-valve.ts";
import { type Place, place, startServer } from "#test/main/cli/start-server.ts";
import { allDemands, residentOf } from "#test/main/engine/drive-engine.ts";

const MB = 2 ** 20;
const linux = process.platform === "linux";
if (!linux) console.log("The memory of a running program is not measured: only Linux tells what a process had resident at most.");

// Read with the system's own count of the server process (VmHWM of /proc): the most that ever was resident of all it holds,
// its code, heaps, threads and shared memory included. That whole is compared with the limit, with nothing taken off.
describe.runIf(linux)("The program's memory", { timeout: 600_000 }, () => {
  const phantom = valvePhantom({ name: "valve", seed: 7, spacingMm: 0.06, noise: 0.05, oneGrain: true });
  let home: Place;
  let record: SpecimenRecord;

  beforeAll(async () => {
    home = await place();
    await mkdir(home.library, { recursive: true });
    const source = sourceFromSlabs(phantom.name, phantom.grid, phantom.dtype, phantom.renderSlab as never);
    const { name, facts, blurFwhmMm, grid } = phantom;
    const common = { created: 0, handedness: "confirmed", polarity: "bright", synthetic: true } as const;
    const options = { library: home.library, id: "valve".padEnd(16, "0"), name, facts, blurFwhmMm, spacing: grid.spacing };
    record = (await makeSpecimen(source, { ...common, ...options })).record;
  }, 300_000);
  afterAll(() => home?.remove());

  test("stays under its limit whatever the engine is asked of a valve of 260 MB, at every level, angle and place", async () => {
    const server = await startServer(home, ["--port", "0", "--no-open", "--grace", "600"]);
    const pid = server.child.pid!;
    const ask = async (path: string, body: object) => {
      const headers = { [TOKEN_HEADER]: server.token };
      const response = await fetch(`${server.origin}/api/${path}`, {
        method: "POST",
        headers,
        body: JSON.stringify(body),
      });
      const isJson = response.headers.get("content-type")?.includes("json");
      return { status: response.status, answer: isJson ? await response.json() : await response.arrayBuffer() };
    };
    try {
      const line = (name: string) => {
        const { now, most } = residentOf(pid);
        return `${name}: ${Math.round(now / MB)} MB resident, ${Math.round(most / MB)} MB at most so far`;
      };
      const lines = [line("idle")];
      for (const demand of allDemands(ask, record, phantom.truth)) {
        await demand.run();
        lines.push(line(demand.name));
      }
      console.log(lines.join("\n"));
      const { most } = residentOf(pid);
      // It did hold something: the bricks, tiles and fronts that the limit is for.
      expect(most).toBeGreaterThan(250 * MB);
      expect(most).toBeLessThan(DEFAULT_MEMORY_MB * MB);
    } finally {
      server.child.kill("SIGTERM");
      await server.ended;
    }
  });
});
