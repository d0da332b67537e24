import { afterEach, describe, expect, it } from "vitest";
import type { LogAnswer } from "#shared/api/routes.ts";
import type { PassSummary } from "#shared/api/specimen.ts";
import { type Place, place, putSpecimenOnDisk, type RunningServer, startServer } from "#test/main/cli/start-server.ts";
import { SampleWriter } from "#test/main/node/sample-log.ts";

const SPECIMEN = "s0000000000000000001";
const KILLS = 5;

let where: Place;
let server: RunningServer | null = null;
afterEach(async () => {
  if (server?.child.exitCode === null) server.child.kill("SIGKILL");
  await server?.ended;
  await where.remove();
});

describe("a server killed by kill -9 while edits come in", () => {
  it(`has every acknowledged edit after restart, ${KILLS} times over`, async () => {
    where = await place();
    await putSpecimenOnDisk(where.library, SPECIMEN);
    let pass = "";
    let saved: string[] = [];
    let waiting: string[] = [];
    for (let kill = 0; kill < KILLS; kill += 1) {
      server = await startServer(where);
      if (pass === "") {
        const made = await server.call<PassSummary>("POST", `/api/specimens/${SPECIMEN}/passes`, { annotator: "AN-1" });
        pass = made.answer.id;
      }
      const path = `/api/passes/${SPECIMEN}/${pass}/log`;
      const { answer: log } = await server.call<LogAnswer>("GET", path);
      expect(log.lines.slice(0, saved.length)).toEqual(saved);
      // The one that was on its way may have reached the disk; nothing else may.
      if (saved.length > 0) expect([...saved, ...waiting].slice(0, log.lines.length)).toEqual(log.lines);
      saved = [...log.lines];
      waiting = [];
      const writer = new SampleWriter(log);
      // Killed after another number of edits each time, while the next one is on its way.
      const edits = 7 + 13 * kill;
      for (let edit = 0; edit < edits; edit += 1) {
        const base = writer.history.head;
        waiting = writer.edit();
        const sent = server.call<{ outcome: string }>("POST", path, {
          window: `w${kill}`,
          epoch: log.epoch,
          base,
          lines: waiting,
        });
        if (edit === edits - 1) {
          sent.catch(() => undefined);
          server.child.kill("SIGKILL");
          break;
        }
        expect((await sent).answer).toMatchObject({ outcome: "appended" });
        saved.push(...waiting);
      }
      await server.ended;
    }
    server = await startServer(where);
    const { answer: log } = await server.call<LogAnswer>("GET", `/api/passes/${SPECIMEN}/${pass}/log`);
    expect(log.lines.slice(0, saved.length)).toEqual(saved);
    expect(saved.length).toBeGreaterThan(KILLS * 7);
    const { answer: shelf } = await server.call<{ problems: string[] }>("GET", "/api/shelf");
    expect(shelf.problems).toEqual([]);
  }, 180_000);
});
