// Assembles shared/tracing/ridge/wasm/ridge.wat ahead of time into a module in base64, so that the program needs no assembler and
// no file to load. `node test/tools/make-ridge-wasm.mjs` writes it anew; a test compares.
import { readFileSync, writeFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import wabt from "wabt";

const at = (path) => fileURLToPath(new URL(`../../${path}`, import.meta.url));
export const SOURCE_PATH = at("shared/tracing/ridge/wasm/ridge.wat");
export const MODULE_PATH = at("shared/tracing/ridge/wasm/ridge-wasm.generated.ts");

/** The source text of the module. */
export async function makeRidgeWasm() {
  const { parseWat } = await wabt();
  const module = parseWat("ridge.wat", readFileSync(SOURCE_PATH, "utf8"), { simd: true });
  module.resolveNames();
  module.validate({ simd: true });
  const base64 = Buffer.from(module.toBinary({}).buffer).toString("base64");
  module.destroy();
  return `// Assembled from ridge.wat by test/tools/make-ridge-wasm.mjs; do not edit.
/** The module of the ridge measure, WebAssembly with 128-bit SIMD, in base64. */
export const RIDGE_WASM_BASE64 =
  "${base64}";
`;
}

if (process.argv[1] === fileURLToPath(import.meta.url)) writeFileSync(MODULE_PATH, await makeRidgeWasm());
