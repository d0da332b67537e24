import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { ERROR_HEADER, ROUTES, type RouteName } from "#shared/api/routes.ts";
import { STATUS_OF_TAG } from "#shared/errors.ts";
import { type SamplePorts, samplePorts } from "#test/contract/sample-ports.ts";
import { sampleRequests } from "#test/contract/sample-requests.ts";
import { bareHandler, type Shell } from "#test/contract/shells.ts";
import { SPECIMEN } from "#test/main/node/sample-library.ts";

/** Mulberry32, a published small generator, so that a failing body can be made again from its seed. */
function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

const ODD = [
  "null",
  "-1",
  "1e308",
  "[]",
  "{}",
  '""',
  "true",
  '"\\u0000"',
  '"../../etc/passwd"',
  "99999999999999999999",
  `"${"x".repeat(5000)}"`,
];

/** The text with a few of its pieces cut, doubled, or replaced by another value. */
function mutated(text: string, random: () => number): string {
  let result = text;
  for (let times = 1 + Math.floor(random() * 3); times > 0; times -= 1) {
    const at = Math.floor(random() * result.length);
    const length = 1 + Math.floor(random() * 8);
    const odd = ODD[Math.floor(random() * ODD.length)]!;
    const kind = random();
    if (kind < 0.25) result = result.slice(0, at) + result.slice(at + length);
    else if (kind < 0.4) result = result.slice(0, at);
    else if (kind < 0.55) result = result.slice(0, at) + result.slice(at, at + length) + result.slice(at);
    else {
      // A whole value after a colon or comma goes.
      const value = /(?<=[:,[])(-?\d+(\.\d+)?|"[^"]*"|true|null)/g;
      const places = [...result.matchAll(value)];
      const place = places[Math.floor(random() * places.length)];
      if (place) result = result.slice(0, place.index) + odd + result.slice(place.index + place[0].length);
    }
  }
  return result;
}

describe("requests whose bodies were mutated", () => {
  let sample: SamplePorts;
  let shell: Shell;
  const faults: unknown[] = [];
  beforeAll(async () => {
    sample = await samplePorts();
    shell = await bareHandler(sample.ports, (error) => void faults.push(error));
  });
  afterAll(() => sample.close());

  it("get an answer or a tagged refusal, never a fault of the program", async () => {
    const { epoch, head } = await sample.ports.library.readLog(SPECIMEN, sample.pass, 0);
    const { removeSpecimen: _, ...requests } = sampleRequests(sample.pass, { epoch, head }, sample.job, sample.study);
    for (const [index, [route, request]] of Object.entries(requests).entries()) {
      if (request.body === undefined) continue;
      const { method, path } = ROUTES[route as RouteName];
      const target = path.replace(/:([a-z]+)/g, (__, key: string) => request.path![key]!);
      for (let round = 0; round < 60; round += 1) {
        const seed = 1000 * index + round;
        const body = mutated(JSON.stringify(request.body), seeded(seed));
        const answer = await shell.send(target, { method, body });
        const told = `${route}, seed ${seed}: ${body.slice(0, 200)}`;
        expect(answer.status, told).not.toBe(500);
        if (answer.headers.has(ERROR_HEADER))
          expect(STATUS_OF_TAG, told).toHaveProperty(((await answer.json()) as { tag: string }).tag);
      }
    }
    expect(faults).toEqual([]);
  });
});
