import type { Page } from "playwright-core";

/** One request of the page, or one thing the hand did; times in milliseconds of the page's clock. */
export interface Logged {
  readonly what: string;
  readonly sent: number;
  /** NaN while there is no answer. */
  readonly answered: number;
  /** The first frame after the answer. */
  readonly painted: number;
  readonly status: number;
  /** Of a guide preview. */
  readonly coarse: boolean | null;
  /** Of a section: moving or still; of a preview: its session. */
  readonly note: string;
}

/** Notes, from inside the page, every request to the engine and every movement of the hand. Call before the page is opened. */
export async function logRequests(page: Page): Promise<void> {
  await page.addInitScript(() => {
    const log: Record<string, unknown>[] = [];
    Object.assign(window, { feelLog: log });
    for (const what of ["pointermove", "pointerup", "wheel", "click"]) {
      const note = () => {
        const entry: Record<string, unknown> = { what, sent: performance.now() };
        log.push(entry);
        // The second frame from now: what the first one drew is on the screen then.
        if (what === "pointerup" || what === "click")
          requestAnimationFrame(() => requestAnimationFrame(() => Object.assign(entry, { painted: performance.now() })));
      };
      addEventListener(what, note, { capture: true, passive: true });
    }
    const send = window.fetch;
    window.fetch = async (input, init) => {
      const path = String(input);
      if (!path.includes("/api/engine/")) return send(input, init);
      const body = JSON.parse(String(init?.body ?? "{}"));
      const entry: Record<string, unknown> = {
        what: path.replace(/.*\/api\/engine\//, ""),
        sent: performance.now(),
        note: body.quality ?? body.session ?? "",
      };
      log.push(entry);
      const answer = await send(input, init);
      entry.answered = performance.now();
      entry.status = answer.status;
      if (answer.headers.get("content-type")?.includes("json")) entry.coarse = (await answer.clone().json()).coarse;
      requestAnimationFrame(() => {
        entry.painted = performance.now();
      });
      return answer;
    };
  });
}

/** What was noted since `from` (0 = all), in order. */
export async function readLog(page: Page, from = 0): Promise<readonly Logged[]> {
  const raw = await page.evaluate(() => (window as unknown as { feelLog: Record<string, unknown>[] }).feelLog);
  const number = (value: unknown) => (typeof value === "number" ? value : Number.NaN);
  return raw
    .map((entry) => ({
      what: String(entry.what),
      sent: number(entry.sent),
      answered: number(entry.answered),
      painted: number(entry.painted),
      status: number(entry.status),
      coarse: typeof entry.coarse === "boolean" ? entry.coarse : null,
      note: String(entry.note ?? ""),
    }))
    .filter((entry) => entry.sent >= from);
}

export function pageNow(page: Page): Promise<number> {
  return page.evaluate(() => performance.now());
}
