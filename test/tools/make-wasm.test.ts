import { readFileSync } from "node:fs";
import { expect, it } from "vitest";
// @ts-expect-error a plain script without types
import { KERNELS, makeWasm } from "./make-wasm.mjs";

it.each(KERNELS as { module: string }[])("$module is what its source assembles to today", async (kernel) => {
  expect(readFileSync(new URL(`../../${kernel.module}`, import.meta.url), "utf8")).toBe(await makeWasm(kernel));
});
