// How the desk feels on the demo valve: the built program, a real browser, a hand on the section. Wall-clock times, so what
// else runs on the machine counts; the load is printed. Run: npm run build && npm run bench -- feel
import { loadavg } from "node:os";
import { join } from "node:path";
import type { Page } from "playwright-core";
import { startPass } from "#test/browser/desk-steps.ts";
import { type Logged, logRequests, pageNow, readLog } from "#test/browser/request-log.ts";
import { openPage, startProgram } from "#test/browser/running-program.ts";

type Print = (line: string) => void;
/** A place of the section pane as shares of its width and height. */
type Share = readonly [number, number];

/** Along one string of the demo valve in the front plane, and a place at the far end of the pane. */
const PIN: Share = [0.263, 0.67];
const SECOND: Share = [0.255, 0.54];
const ON: Share = [0.244, 0.4];
const FAR: Share = [0.8, 0.2];
const FRAME_MS = 16;

export async function bench(print: Print): Promise<void> {
  const program = await startProgram();
  const { page, faults, close } = await openPage(program.url, join(program.folder, "profile"));
  try {
    await logRequests(page);
    await page.reload();
    await page.getByRole("button", { name: "Open the demo valve" }).first().click();
    await page.getByRole("button", { name: /^Open AN-1/ }).waitFor({ timeout: 300_000 });
    await startPass(page, "AN-4");
    await page.getByRole("button", { name: "front", exact: true }).click();
    await page.waitForTimeout(2000);
    const hand = await handOn(page);
    const load = () => `load ${loadavg()[0]!.toFixed(1)}`;
    await newPin(page, hand, print, "first pin of the desk", PIN, SECOND);
    await single(page, hand, print, "inside the front, pointer rests after each move", SECOND, ON);
    await running(page, hand, print, "inside the front, pointer moves on", SECOND, ON);
    print(load());
    await duringSolve(page, hand, print);
    await newPin(page, hand, print, "later pin", ON, SECOND);
    await newPin(page, hand, print, "later pin, pointer far away", SECOND, FAR);
    await single(page, hand, print, "far from the pin", [0.7, 0.2], FAR);
    print(load());
    await page.keyboard.press("Escape");
    await planes(page, hand, print);
    print(load());
    const noise = faults.length === 0 ? "none" : `${faults.length}, the first: ${faults[0]}`;
    print(`errors on the browser's console: ${noise}`);
  } finally {
    await close();
    await program.stop();
  }
}

interface Hand {
  readonly to: (place: Share) => Promise<void>;
  readonly click: (place: Share) => Promise<void>;
}

async function handOn(page: Page): Promise<Hand> {
  const box = (await page.locator(".section-view").boundingBox())!;
  const at = ([x, y]: Share) => [box.x + box.width * x, box.y + box.height * y] as const;
  return { to: (place) => page.mouse.move(...at(place)), click: (place) => page.mouse.click(...at(place)) };
}

const between = (a: Share, b: Share, t: number): Share => [a[0] + (b[0] - a[0]) * t, a[1] + (b[1] - a[1]) * t];

/** Median and 95th percentile with the count. */
function figures(times: readonly number[]): string {
  const sorted = times.filter(Number.isFinite).sort((a, b) => a - b);
  if (sorted.length === 0) return "nothing to measure";
  const at = (share: number) => sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))]!.toFixed(0);
  return `median ${at(0.5)} ms, 95th ${at(0.95)} ms (${sorted.length})`;
}

/** Previews shown, each with the age of the pointer's place that it answers: that of the last snap answered before it was asked. */
function shownPreviews(log: readonly Logged[]): { readonly age: number; readonly coarse: boolean }[] {
  const moves = log.filter(({ what }) => what === "pointermove");
  const snaps = log.filter(({ what }) => what === "snap");
  return log.flatMap((preview) => {
    if (preview.what !== "guide/preview" || preview.coarse === null || preview.status !== 200) return [];
    const snap = snaps.filter(({ answered }) => answered <= preview.sent + 0.5).at(-1);
    const move = snap && moves.filter(({ sent }) => sent <= snap.sent + 0.5).at(-1);
    return move ? [{ age: preview.painted - move.sent, coarse: preview.coarse }] : [];
  });
}

/** A click sets a pin, the pointer goes on at once and rests: when does something show, and when is it fine? */
async function newPin(page: Page, hand: Hand, print: Print, name: string, pin: Share, next: Share): Promise<void> {
  await hand.to(pin);
  await page.waitForTimeout(600);
  const from = await pageNow(page);
  await hand.click(pin);
  for (let n = 1; n <= 6; n++) await hand.to(between(pin, next, n / 6));
  await page.waitForTimeout(5000);
  const log = await readLog(page, from);
  const click = log.find(({ what }) => what === "pointerup")!.sent;
  const opened = log.find(({ what }) => what === "guide/open")?.sent ?? Number.NaN;
  const previews = log.filter((entry) => entry.what === "guide/preview" && entry.coarse !== null && entry.sent >= opened);
  const first = previews[0];
  const fine = previews.find(({ coarse }) => coarse === false);
  const after = (time: number | undefined) => (time === undefined ? "not within 5 s" : `${(time - click).toFixed(0)} ms`);
  const way = first ? ` (session asked for after ${after(opened)}, preview after ${after(first.sent)})` : "";
  print(
    `${name}: first preview after ${after(first?.painted)}${first?.coarse ? ", coarse" : ""}${way}, fine after ${after(fine?.painted)}`,
  );
}

/** One movement at a time, each answered before the next. */
async function single(page: Page, hand: Hand, print: Print, name: string, a: Share, b: Share): Promise<void> {
  await hand.to(a);
  await page.waitForTimeout(2500);
  const ages: number[] = [];
  let coarse = 0;
  for (let n = 1; n <= 40; n++) {
    const from = await pageNow(page);
    await hand.to(between(a, b, (n % 20) / 20));
    await page.waitForTimeout(120);
    const shown = shownPreviews(await readLog(page, from))[0];
    if (!shown) continue;
    ages.push(shown.age);
    if (shown.coarse) coarse++;
  }
  print(`${name}: ${figures(ages)}, ${coarse} coarse, ${40 - ages.length} of 40 moves without an answer in 120 ms`);
}

/** The pointer moves without a pause for two seconds. */
async function running(page: Page, hand: Hand, print: Print, name: string, a: Share, b: Share, ms = 2000): Promise<void> {
  const from = await pageNow(page);
  await moveFor(hand, a, b, ms);
  const until = await pageNow(page);
  const shown = shownPreviews((await readLog(page, from)).filter(({ answered, sent }) => (answered || sent) <= until));
  const coarse = shown.filter((each) => each.coarse).length;
  print(
    `${name}: ${figures(shown.map(({ age }) => age))}, ${((shown.length * 1000) / ms).toFixed(0)} a second, ${coarse} coarse`,
  );
}

async function moveFor(hand: Hand, a: Share, b: Share, ms: number): Promise<void> {
  const start = performance.now();
  for (let n = 0; performance.now() - start < ms; n++) {
    await hand.to(between(a, b, (1 + Math.sin(n / 12)) / 2));
    await new Promise((resolve) => setTimeout(resolve, FRAME_MS));
  }
}

/** A second pin: while its stretch is solved the pointer goes on. */
async function duringSolve(page: Page, hand: Hand, print: Print): Promise<void> {
  await hand.to(SECOND);
  await page.waitForTimeout(600);
  const from = await pageNow(page);
  await hand.click(SECOND);
  await moveFor(hand, SECOND, ON, 3000);
  await page.waitForTimeout(4000);
  const log = await readLog(page, from);
  const solve = log.find(({ what }) => what === "solve");
  if (!solve) return print("no solve was asked for");
  const busy = log.filter(({ sent }) => sent >= solve.sent && sent < solve.answered);
  const time = (what: string) =>
    figures(busy.filter((entry) => entry.what === what && entry.status === 200).map((e) => e.answered - e.sent));
  print(
    `solve of one stretch: ${(solve.answered - solve.sent).toFixed(0)} ms; meanwhile snap ${time("snap")}, preview ${time("guide/preview")}`,
  );
}

/** Steps through planes by the wheel at about 60 a second, then stops. */
async function planes(page: Page, hand: Hand, print: Print): Promise<void> {
  await hand.to([0.5, 0.5]);
  await page.waitForTimeout(1000);
  const from = await pageNow(page);
  const start = performance.now();
  for (let n = 0; performance.now() - start < 3000; n++) {
    await page.mouse.wheel(0, n % 120 < 60 ? 100 : -100);
    await new Promise((resolve) => setTimeout(resolve, FRAME_MS));
  }
  await page.waitForTimeout(1500);
  const log = await readLog(page, from);
  const wheels = log.filter(({ what }) => what === "wheel");
  const last = wheels.at(-1)!.sent;
  const sections = log.filter(({ what, painted }) => what === "section" && Number.isFinite(painted));
  const moving = sections.filter(({ note }) => note === "moving");
  const ages = moving.map(
    ({ sent, painted }) => painted - (wheels.filter((wheel) => wheel.sent <= sent + 0.5).at(-1)?.sent ?? Number.NaN),
  );
  const sharp = sections.filter(({ note }) => note === "still").at(-1);
  const stepped = (last - from) / 1000;
  print(`section while moving: ${figures(ages)}; request alone ${figures(moving.map((e) => e.answered - e.sent))}`);
  print(
    `planes a second while stepping: ${(moving.filter(({ answered }) => answered <= last).length / stepped).toFixed(0)} of ${(wheels.length / stepped).toFixed(0)} asked for`,
  );
  print(`answers of moving planes after the stop: ${moving.filter(({ answered }) => answered > last).length}`);
  if (sharp)
    print(
      `section sharp: ${(sharp.answered - sharp.sent).toFixed(0)} ms, shown ${(sharp.painted - last).toFixed(0)} ms after the stop`,
    );
}
