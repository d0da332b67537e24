import type { Page } from "playwright-core";
import type { PlaneMm } from "#shared/api/engine.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, cross, dot, normalise, scale, subtract } from "#shared/geometry/vec3.ts";

/** A place of the section pane as shares of its width and height. */
export type Share = readonly [number, number];

/** The sharp plane that the page asked for last: where the section's pixels lie in the specimen. */
export interface ShownPlane {
  /** Resolves once the page has asked for a sharp plane after the last movement. */
  now(): Promise<PlaneMm & { readonly slabMm: number }>;
}

/** Listens to what the page asks for. Call before it shows a section. */
export function watchPlane(page: Page): ShownPlane {
  let last: (PlaneMm & { readonly slabMm: number }) | null = null;
  page.on("request", (request) => {
    if (!request.url().endsWith("/api/engine/section")) return;
    const body = request.postDataJSON() as { plane: PlaneMm; slabMm: number; quality: string } | null;
    if (body?.quality === "still") last = { ...body.plane, slabMm: body.slabMm };
  });
  return {
    async now() {
      // A moving section is asked for sharply after a moment; until that has been, the last one is not where the pane is.
      await page.waitForTimeout(700);
      for (;;) {
        if (last) return last;
        await page.waitForTimeout(50);
      }
    },
  };
}

export function normalOf({ u, v }: PlaneMm): Vec3 {
  return normalise(cross(u, v));
}

/** Where a place appears in the pane, and how far behind the plane it lies, millimetres. */
export function inPane(plane: PlaneMm, place: Vec3): { readonly share: Share; readonly depthMm: number } {
  const from = subtract(place, plane.origin);
  const along = (axis: Vec3, count: number) => dot(from, axis) / dot(axis, axis) / count;
  return { share: [along(plane.u, plane.width), along(plane.v, plane.height)], depthMm: dot(from, normalOf(plane)) };
}

/** The place in the plane under a place of the pane. */
export function placeAt(plane: PlaneMm, [x, y]: Share): Vec3 {
  return add(plane.origin, add(scale(plane.u, x * plane.width), scale(plane.v, y * plane.height)));
}

/**
 * Brings a place to the middle of the pane as a person would, by wheel, control-wheel and drag, at about `mmPerPixel`.
 * @returns the plane then shown.
 */
export async function bringTo(page: Page, shown: ShownPlane, place: Vec3, mmPerPixel: number): Promise<PlaneMm> {
  const box = (await page.locator(".section-view").boundingBox())!;
  const at = ([x, y]: Share) => [box.x + box.width * x, box.y + box.height * y] as const;
  const middle: Share = [0.5, 0.5];
  await page.mouse.move(...at(middle));
  const length = (v: Vec3) => Math.sqrt(dot(v, v));
  for (let turn = 0; turn < 12; turn++) {
    const plane = await shown.now();
    const { share, depthMm } = inPane(plane, place);
    const pixel = length(plane.u);
    const off = Math.max(Math.abs(share[0] - 0.5), Math.abs(share[1] - 0.5));
    if (off > 0.12) {
      const reach = Math.min(1, 0.45 / off);
      await page.mouse.move(...at(middle));
      await page.mouse.down();
      await page.mouse.move(...at([0.5 - reach * (share[0] - 0.5), 0.5 - reach * (share[1] - 0.5)]), { steps: 3 });
      await page.mouse.up();
      continue;
    }
    if (pixel > 1.3 * mmPerPixel || pixel < mmPerPixel / 1.3) {
      await page.mouse.move(...at(share));
      await page.keyboard.down("Control");
      const notches = Math.round(4 * Math.log2(pixel / mmPerPixel));
      for (let n = 0; n < Math.min(20, Math.abs(notches)); n++) await page.mouse.wheel(0, notches > 0 ? -100 : 100);
      await page.keyboard.up("Control");
      continue;
    }
    if (Math.abs(depthMm) < 0.1) return plane;
    // One notch tells how far a notch goes; the rest follow.
    const notch = depthMm > 0 ? 100 : -100;
    await page.mouse.wheel(0, notch);
    const moved = dot(subtract((await shown.now()).origin, plane.origin), normalOf(plane));
    const more = moved === 0 ? 0 : Math.max(-400, Math.min(400, Math.round((depthMm - moved) / moved)));
    for (let n = 0; n < Math.abs(more); n++) await page.mouse.wheel(0, more > 0 ? notch : -notch);
  }
  return shown.now();
}
