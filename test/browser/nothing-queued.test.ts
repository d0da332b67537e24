import { join } from "node:path";
import type { Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { HelloAnswer } from "#shared/api/routes.ts";
import { ROUTES, TOKEN_HEADER } from "#shared/api/routes.ts";
import { startPass } from "#test/browser/desk-steps.ts";
import { type Logged, logRequests, pageNow, readLog } from "#test/browser/request-log.ts";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";

/** Along one string of the demo valve in the front plane, shares of the section pane. */
const PIN = [0.263, 0.67] as const;
const ON = [0.244, 0.4] as const;
/** What may still leave after the hand has stopped: the one that waited in its line, and the sharp one after the moving ones. */
const MOST_AFTER_STOP = 2;
/** Answers in a row, each seen in a turn of its own, over which nothing new may leave. */
const QUIET_TURNS = 25;

// Counted in requests and turns, never in time: a slow machine takes longer over it, and passes all the same.
describe("After the hand has stopped", { timeout: 300_000 }, () => {
  let program: RunningProgram;
  let open: OpenPage;
  let page: Page;

  beforeAll(async () => {
    program = await startProgram();
    open = await openPage(program.url, join(program.folder, "profile"));
    page = open.page;
    await logRequests(page);
    await page.reload();
    await page.getByRole("button", { name: "Open the demo valve" }).first().click();
    await page.getByRole("button", { name: /^Open AN-1/ }).waitFor({ timeout: 300_000 });
    await startPass(page, "AN-4");
    await page.getByRole("button", { name: "front", exact: true }).click();
  }, 300_000);
  afterAll(async () => {
    await open?.close();
    await program?.stop();
  });

  /** What the engine has queued and works on, asked past the page. */
  async function engineLoad(): Promise<HelloAnswer["work"]> {
    const { origin, hash } = new URL(program.url);
    const token = new URLSearchParams(hash.slice(1)).get("token")!;
    const answer = await fetch(origin + ROUTES.hello.path, { headers: { [TOKEN_HEADER]: token } });
    return ((await answer.json()) as HelloAnswer).work;
  }

  /** Waits until all is answered and the engine at rest, and stays so over many turns; gives what the page sent since `from`. */
  async function settled(from: number): Promise<readonly Logged[]> {
    let quiet = 0;
    let sent = -1;
    for (let turn = 0; quiet < QUIET_TURNS; turn++) {
      expect(turn, "turns until nothing is sent any more").toBeLessThan(2000);
      const log = await requests(from);
      const { waiting, running } = await engineLoad();
      const rests = log.every(({ answered }) => Number.isFinite(answered)) && waiting + running === 0;
      quiet = rests && log.length === sent ? quiet + 1 : 0;
      sent = log.length;
      await page.evaluate(() => new Promise((next) => requestAnimationFrame(next)));
    }
    return requests(from);
  }

  const requests = async (from: number) =>
    (await readLog(page, from)).filter(({ what }) => !["pointermove", "pointerup", "wheel", "click"].includes(what));

  /** The most requests of one kind that were under way at once. */
  function mostAtOnce(log: readonly Logged[], what: string): number {
    const own = log.filter((entry) => entry.what === what);
    return Math.max(0, ...own.map((one) => own.filter(({ sent, answered }) => sent <= one.sent && answered > one.sent).length));
  }

  /** Moves, then checks what was under way at once, and what left afterwards. */
  async function check(move: () => Promise<void>, kinds: readonly string[]): Promise<void> {
    await settled(0);
    const from = await pageNow(page);
    await move();
    const stop = (await readLog(page, from)).filter(({ what }) => ["pointermove", "wheel"].includes(what)).at(-1)!.sent;
    const log = await settled(from);
    for (const kind of new Set(log.map(({ what }) => what))) {
      const after = log.filter(({ what, sent }) => what === kind && sent > stop).length;
      expect(after, `${kind} sent after the stop`).toBeLessThanOrEqual(MOST_AFTER_STOP);
    }
    for (const kind of kinds) {
      expect(log.filter(({ what }) => what === kind).length, `${kind} asked for at all`).toBeGreaterThan(2);
      // A sharp plane that is not wanted any more is overtaken; anything else waits for the answer before.
      expect(mostAtOnce(log, kind), `${kind} at once`).toBeLessThanOrEqual(kind === "section" ? 2 : 1);
    }
    expect(await engineLoad()).toEqual({ waiting: 0, running: 0 });
  }

  it("with the wheel, nothing is queued and no more than the sharp plane is asked for", async () => {
    const box = (await page.locator(".section-view").boundingBox())!;
    await page.mouse.move(box.x + box.width / 2, box.y + box.height / 2);
    await check(async () => {
      for (let n = 0; n < 120; n++) await page.mouse.wheel(0, n % 60 < 40 ? 100 : -100);
    }, ["section"]);
  });

  it("with a guide open and the pointer running, nothing is queued and the last place alone is answered", async () => {
    const box = (await page.locator(".section-view").boundingBox())!;
    const at = (share: number) =>
      [
        box.x + box.width * (PIN[0] + (ON[0] - PIN[0]) * share),
        box.y + box.height * (PIN[1] + (ON[1] - PIN[1]) * share),
      ] as const;
    await page.mouse.click(...at(0));
    await page.locator(".section-view").hover({ position: { x: box.width * ON[0], y: box.height * ON[1] } });
    await check(async () => {
      for (let n = 0; n < 150; n++) await page.mouse.move(...at((1 + Math.sin(n / 9)) / 2));
    }, ["snap", "guide/preview"]);
    await page.keyboard.press("Escape");
  });

  it("after a drag of the plane, nothing is queued", async () => {
    const box = (await page.locator(".section-view").boundingBox())!;
    const at = (n: number) =>
      [box.x + box.width / 2 + 80 * Math.sin(n / 11), box.y + box.height / 2 + 60 * Math.cos(n / 7)] as const;
    await check(async () => {
      await page.mouse.move(...at(0));
      await page.mouse.down();
      for (let n = 0; n < 120; n++) await page.mouse.move(...at(n));
      await page.mouse.up();
    }, ["section"]);
    expect(open.faults).toEqual([]);
  });
});
