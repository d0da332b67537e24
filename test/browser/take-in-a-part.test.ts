import { createHash } from "node:crypto";
import { cp, readdir, readFile, rename, rm } from "node:fs/promises";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { deskReady, startPass } from "#test/browser/desk-steps.ts";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";
import { SIZE, SPACING_MM, writeSmallScan } from "#test/browser/small-scan.ts";

describe("a part of a scan, taken in through the window", () => {
  let program: RunningProgram;
  let open: OpenPage;
  let scan: string;

  beforeAll(async () => {
    program = await startProgram();
    scan = await writeSmallScan(program.folder);
    open = await openPage(program.url, join(program.folder, "profile"));
  });
  afterAll(async () => {
    await open?.close();
    await program?.kill();
    if (program) await rm(program.folder, { recursive: true, force: true });
  });

  it("is drawn on projections of the scan, packed, and opens on the desk where it lies", async () => {
    const { page } = open;
    await page.getByRole("button", { name: "Add a scan", exact: true }).click();
    await page.getByLabel("Path of the file or folder").fill(scan);
    await page.getByRole("button", { name: "Look at it" }).click();
    await page.getByLabel("only a box of it").check();
    // The pictures come from the server; this scan is small enough to be looked at whole.
    await page.getByText("The strongest voxels along each axis.").waitFor();
    const first = page.locator(".part-frame svg").first();
    await first.scrollIntoViewIfNeeded();
    const box = (await first.boundingBox())!;
    await page.mouse.move(box.x + box.width * 0.1, box.y + box.height * 0.05);
    await page.mouse.down();
    await page.mouse.move(box.x + box.width * 0.5, box.y + box.height * 0.5);
    await page.mouse.move(box.x + box.width * 0.98, box.y + box.height * 0.98);
    await page.mouse.up();
    await page.getByLabel("Box, x from").fill("12");
    const edges = await page
      .getByLabel(/^Box, /)
      .evaluateAll((fields) => fields.map((field) => Number((field as HTMLInputElement).value)));
    const [x0, x1, y0, y1, z0, z1] = edges as [number, number, number, number, number, number];
    expect([x0, z0, z1]).toEqual([12, 0, SIZE[2]]);
    // Drawn within a pixel: some 0.64 voxels here.
    expect(Math.abs(y0 - 6)).toBeLessThanOrEqual(2);
    expect(Math.abs(y1 - 117.6)).toBeLessThanOrEqual(2);
    await page.getByLabel("as a packed copy").check();
    await page.getByText(/of the plain copy, measured on \d+ bricks/).waitFor();
    const checked = page.getByLabel("I have checked that this voxel size is right");
    if (await checked.count()) await checked.check();
    await page.getByRole("button", { name: "Take it in" }).click();
    await page.getByRole("dialog").waitFor({ state: "detached" });
    await startPass(page, "AN-1");
    await deskReady(page);

    const [id] = await readdir(join(program.library, "specimens"));
    const { volume } = JSON.parse(await readFile(join(program.library, "specimens", id!, "specimen.json"), "utf8"));
    const bytes = (await readFile(scan)).subarray(-2 * SIZE[0] * SIZE[1] * SIZE[2]);
    const sha256 = createHash("sha256").update(bytes).digest("hex");
    expect(volume.derivedFrom).toEqual({ sha256, crop: [x0, y0, z0, x1, y1, z1], bin: 1 });
    expect(volume.packing).toBe("gzip");
    expect(volume.size).toEqual([x1 - x0, y1 - y0, z1 - z0]);
    for (const [axis, from] of [x0, y0, z0].entries()) expect(volume.origin[axis]).toBeCloseTo(from * SPACING_MM, 9);
    expect(open.faults).toEqual([]);
  });

  it("is used where it lies by another specimen, which says so when it was moved, and opens again once it is back", async () => {
    const [id] = await readdir(join(program.library, "specimens"));
    const store = join(program.folder, "valve.ome.zarr");
    await cp(join(program.library, "specimens", id!, "scan.ome.zarr"), store, { recursive: true });
    const { page } = open;
    await page.goto(program.url);
    await page.getByRole("button", { name: "Add a scan", exact: true }).click();
    await page.getByLabel("Path of the file or folder").fill(store);
    await page.getByRole("button", { name: "Look at it" }).click();
    await page.getByLabel("where it lies").check();
    await page.getByLabel("Name of the specimen").fill("HB-IN-PLACE");
    const checked = page.getByLabel("I have checked that this voxel size is right");
    if (await checked.count()) await checked.check();
    await page.getByRole("button", { name: "Take it in" }).click();
    const row = page.locator(".shelf-row", { hasText: "HB-IN-PLACE" });
    await row.getByText("part of a scan · used where it lies").waitFor({ timeout: 60_000 });
    await row.locator("canvas").waitFor({ timeout: 60_000 });

    await open.close();
    await program.kill();
    await rename(store, `${store}-away`);
    const { folder } = program;
    program = await startProgram(folder);
    open = await openPage(program.url, join(folder, "profile"));
    const again = open.page.locator(".shelf-row", { hasText: "HB-IN-PLACE" });
    await again.getByText("Put it back where it was").waitFor({ timeout: 60_000 });
    await rename(`${store}-away`, store);
    await open.page.reload();
    await again.locator("canvas").waitFor({ timeout: 60_000 });
    expect(await again.getByRole("alert").count()).toBe(0);
  });
});
