import { readFileSync } from "node:fs";
import { expect, it } from "vitest";
// @ts-expect-error a plain script without types
import { MODULE_PATH, makeRidgeWasm } from "./make-ridge-wasm.mjs";

it("the ridge measure's module is what its source assembles to today", async () => {
  expect(readFileSync(MODULE_PATH, "utf8")).toBe(await makeRidgeWasm());
});
