// How the desk feels on a large scan: the built program, a real browser, a hand on the section. Wall-clock times, so what else
// runs on the machine counts; the load is printed. Run: npm run build && npm run bench -- feel [GB]   (the scan is 0.25 GB
// without a size; 8 is the reference scan)
import { mkdir, mkdtemp } from "node:fs/promises";
import { loadavg } from "node:os";
import { join } from "node:path";
import type { Page } from "playwright-core";
import { makeSpecimen } from "#main/intake/make-specimen.ts";
import type { PlaneMm } from "#shared/api/engine.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { dot, subtract } from "#shared/geometry/vec3.ts";
import type { PhantomSpecimen } from "#shared/phantom/phantom-specimen.ts";
import { startPass } from "#test/browser/desk-steps.ts";
import { FeelTable, figures, shownPreviews } from "#test/browser/feel-figures.ts";
import { logRequests, pageNow, readLog } from "#test/browser/request-log.ts";
import { openPage, startProgram } from "#test/browser/running-program.ts";
import { bringTo, inPane, normalOf, type Share, type ShownPlane, watchPlane } from "#test/browser/shown-plane.ts";
import { referenceScan, referenceSource } from "#test/tools/reference-scan.ts";
import { sizesOr, withWorkFolder } from "#test/tools/work-folder.ts";

type Print = (line: string) => void;

const FRAME_MS = 16;
/** Strings that a pin is set on, and how far the pointer then goes along each, millimetres. */
const PLACES = 6;
const ALONG_MM = 2.5;
const SCALE_MM = 0.03;

export async function bench(print: Print): Promise<void> {
  const [bytes = 0] = sizesOr([0.25]);
  await withWorkFolder(1.45 * bytes + 0.5e9, async (parent) => {
    const folder = await mkdtemp(join(parent, "feel-"));
    const phantom = referenceScan(bytes);
    await takeIn(phantom, bytes, join(folder, "library"));
    const program = await startProgram(folder);
    const { page, faults, close } = await openPage(program.url, join(folder, "profile"), { width: 1600, height: 1000 });
    try {
      await logRequests(page);
      const shown = watchPlane(page);
      await page.reload();
      print(`scan ${phantom.grid.size.join(" x ")}, ${(bytes / 1e9).toFixed(2)} GB; load ${loadavg()[0]!.toFixed(1)}`);
      const desk = new Desk(page, shown, new FeelTable(print));
      await desk.open();
      await desk.planes();
      await desk.trace(phantom);
      print(
        `load ${loadavg()[0]!.toFixed(1)}; errors on the browser's console: ${faults.length === 0 ? "none" : faults.join("; ")}`,
      );
    } finally {
      await close();
      await program.stop();
    }
  });
}

async function takeIn(phantom: PhantomSpecimen, bytes: number, library: string): Promise<void> {
  await mkdir(library, { recursive: true });
  const { grid, facts, landmarks, blurFwhmMm } = phantom;
  const common = { created: 0, handedness: "confirmed", polarity: "bright", synthetic: true } as const;
  const id = "reference".padEnd(16, "0");
  const options = { library, id, name: "Reference", spacing: grid.spacing, facts, landmarks, blurFwhmMm };
  await makeSpecimen(referenceSource(bytes), { ...common, ...options });
}

/** A hand on the desk, and what it measures. */
class Desk {
  constructor(
    private readonly page: Page,
    private readonly shown: ShownPlane,
    private readonly table: FeelTable,
  ) {}

  async open(): Promise<void> {
    await startPass(this.page, "AN-4");
    const began = (await readLog(this.page)).filter(({ what }) => what === "click").at(-1)!.sent;
    const ms = (await this.firstPlane(began)) - began;
    this.table.note("desk usable after opening a specimen", "2 s", `${ms.toFixed(0)} ms`);
    await this.page.getByRole("button", { name: "front", exact: true }).click();
    await this.page.waitForTimeout(1500);
  }

  /** When the first plane after `from` was on the screen. */
  private async firstPlane(from: number): Promise<number> {
    for (;;) {
      const shown = (await readLog(this.page, from)).find(({ what, painted }) => what === "section" && Number.isFinite(painted));
      if (shown) return shown.painted;
      await this.page.waitForTimeout(50);
    }
  }

  /** Steps through planes by the wheel at about 60 a second, without a slab, then once sharp with a slab of 0.4 mm. */
  async planes(): Promise<void> {
    const { page, table } = this;
    await this.slab(0);
    await this.to([0.5, 0.5]);
    await page.waitForTimeout(1000);
    const from = await pageNow(page);
    const start = performance.now();
    for (let n = 0; performance.now() - start < 3000; n++) {
      await page.mouse.wheel(0, n % 120 < 60 ? 100 : -100);
      await new Promise((resolve) => setTimeout(resolve, FRAME_MS));
    }
    await page.waitForTimeout(2000);
    const log = await readLog(page, from);
    const wheels = log.filter(({ what }) => what === "wheel");
    const last = wheels.at(-1)!.sent;
    const sections = log.filter(({ what, painted }) => what === "section" && Number.isFinite(painted));
    const moving = sections.filter(({ note }) => note === "moving");
    const ages = moving.map(
      (one) => one.painted - (wheels.filter((wheel) => wheel.sent <= one.sent + 0.5).at(-1)?.sent ?? Number.NaN),
    );
    table.note("section while moving, request and answer", "40 ms", figures(moving.map((one) => one.answered - one.sent)));
    table.note("section while moving, wheel to picture", "", figures(ages));
    const seconds = (last - from) / 1000;
    const rate = moving.filter(({ answered }) => answered <= last).length / seconds;
    table.note("planes a second while stepping", "20", `${rate.toFixed(0)} (${(wheels.length / seconds).toFixed(0)} asked for)`);
    table.note(
      "planes answered after the stop (one under way, one waiting)",
      "at most 2",
      `${moving.filter(({ answered }) => answered > last).length}`,
    );
    table.note("section sharp when still, from memory", "90 ms", figures(await this.sharp(12)));
    await this.slab(0.4);
    table.note("slab of 0.4 mm, sharp", "400 ms", figures(await this.sharp(12)));
  }

  /** Times of the sharp plane after single steps there and back, once all of them have been seen. */
  private async sharp(count: number): Promise<number[]> {
    const { page } = this;
    const times: number[] = [];
    for (let n = 0; n < count + 4; n++) {
      const from = await pageNow(page);
      await page.mouse.wheel(0, n % 4 < 2 ? 100 : -100);
      await page.waitForTimeout(900);
      const still = (await readLog(page, from)).filter(({ what, note }) => what === "section" && note === "still").at(-1);
      if (still && n >= 4) times.push(still.answered - still.sent);
    }
    return times;
  }

  /** Thins or thickens the slab by its keys until it is so thick. */
  private async slab(mm: number): Promise<void> {
    for (let turn = 0; turn < 12; turn++) {
      const { slabMm } = await this.shown.now();
      if (Math.abs(slabMm - mm) < 1e-6) return;
      await this.page.keyboard.press(slabMm > mm ? "[" : "]");
    }
  }

  async trace(phantom: PhantomSpecimen): Promise<void> {
    const { table } = this;
    const first: number[] = [];
    const fine: number[] = [];
    const inside: number[] = [];
    const outside: number[] = [];
    const clicks: number[] = [];
    let late = 0;
    const plane = await this.shown.now();
    for (const points of flatStrands(phantom, plane).slice(0, PLACES)) {
      const here = await bringTo(this.page, this.shown, points[0]!, SCALE_MM);
      const at = (place: Vec3): Share => inPane(here, place).share;
      const from = await pageNow(this.page);
      await this.click(at(points[0]!));
      for (let n = 1; n <= 6; n++) await this.to(at(points[Math.round((n / 6) * (points.length - 1))]!));
      await this.page.waitForTimeout(4000);
      const log = await readLog(this.page, from);
      const click = log.find(({ what }) => what === "pointerup")!;
      const previews = log.filter((entry) => entry.what === "guide/preview" && entry.coarse !== null);
      clicks.push(click.painted - click.sent);
      first.push((previews[0]?.painted ?? Number.NaN) - click.sent);
      fine.push((previews.find(({ coarse }) => coarse === false)?.painted ?? Number.NaN) - click.sent);
      if (!previews[0]) late++;
      inside.push(...(await this.moves(points.map(at), 12)).filter(({ coarse }) => !coarse).map(({ age }) => age));
      const far: Share[] = [0.1, 0.5, 0.9].map((y) => [at(points[0]!)[0] < 0.5 ? 0.95 : 0.05, y]);
      outside.push(...(await this.moves(far, 6)).filter(({ coarse }) => coarse).map(({ age }) => age));
      await this.page.keyboard.press("Escape");
      await this.page.waitForTimeout(400);
    }
    table.note("any click answered", "100 ms", figures(clicks));
    table.note("new pin anywhere to its first preview", "300 ms", `${figures(first)}${late ? `, ${late} not within 4 s` : ""}`);
    table.note("new pin anywhere to its fine preview", "", figures(fine));
    table.note("pointer move to guide preview, inside the front", "50 / 100 ms", figures(inside));
    table.note("coarse path, outside the front", "150 ms", figures(outside));
  }

  /** Moves through places one at a time, each answered before the next; what was shown. */
  private async moves(places: readonly Share[], count: number): Promise<{ readonly age: number; readonly coarse: boolean }[]> {
    const answers: { age: number; coarse: boolean }[] = [];
    for (let n = 0; n < count; n++) {
      const from = await pageNow(this.page);
      await this.to(places[n % places.length]!);
      await this.page.waitForTimeout(350);
      const [answer] = shownPreviews(await readLog(this.page, from));
      if (answer) answers.push(answer);
    }
    return answers;
  }

  private async at([x, y]: Share): Promise<readonly [number, number]> {
    const box = (await this.page.locator(".section-view").boundingBox())!;
    return [box.x + box.width * x, box.y + box.height * y];
  }

  private async to(place: Share): Promise<void> {
    await this.page.mouse.move(...(await this.at(place)));
  }

  private async click(place: Share): Promise<void> {
    await this.page.mouse.click(...(await this.at(place)));
  }
}

/** The first stretch of each true strand, those first that stay nearest to a plane of this direction. */
function flatStrands(phantom: PhantomSpecimen, plane: PlaneMm): Vec3[][] {
  const normal = normalOf(plane);
  const stretches = phantom.truth.trees.flatMap((tree) =>
    tree.strands.flatMap(({ points }) => {
      const all = (points ?? []) as unknown as Vec3[];
      const begin = Math.floor(all.length / 4);
      const part = all.slice(begin).filter((point) => {
        const from = subtract(point, all[begin]!);
        return Math.sqrt(dot(from, from)) <= ALONG_MM;
      });
      if (part.length < 5) return [];
      const depths = part.map((point) => dot(subtract(point, part[0]!), normal));
      const end = subtract(part.at(-1)!, part[0]!);
      const long = Math.sqrt(dot(end, end));
      return long < 0.8 * ALONG_MM ? [] : [{ part, spread: Math.max(...depths) - Math.min(...depths) }];
    }),
  );
  return stretches.sort((a, b) => a.spread - b.spread).map(({ part }) => part);
}
