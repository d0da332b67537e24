// Assembles the kernels written in WebAssembly text ahead of time into modules in base64, so that the program needs no assembler
// and no file to load. `node test/tools/make-wasm.mjs` writes them anew; a test compares.
import { readFileSync, writeFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import wabt from "wabt";

const at = (path) => fileURLToPath(new URL(`../../${path}`, import.meta.url));

/** Each kernel: its source, the module made of it, and what the module says of itself. */
export const KERNELS = [
  { source: "shared/tracing/ridge/wasm/ridge.wat", name: "RIDGE_WASM_BASE64", of: "the ridge measure" },
  { source: "shared/tracing/minimal-path/wasm/front.wat", name: "FRONT_WASM_BASE64", of: "fronts" },
].map((kernel) => ({ ...kernel, module: kernel.source.replace(/(\w+)\.wat$/, "$1-wasm.generated.ts") }));

/** The source text of a kernel's module. */
export async function makeWasm({ source, name, of }) {
  const { parseWat } = await wabt();
  const file = source.split("/").pop();
  const module = parseWat(file, readFileSync(at(source), "utf8"), { simd: true });
  module.resolveNames();
  module.validate({ simd: true });
  const base64 = Buffer.from(module.toBinary({}).buffer).toString("base64");
  module.destroy();
  return `// Assembled from ${file} by test/tools/make-wasm.mjs; do not edit.
/** The module of ${of}, WebAssembly with 128-bit SIMD, in base64. */
export const ${name} =
  "${base64}";
`;
}

if (process.argv[1] === fileURLToPath(import.meta.url))
  for (const kernel of KERNELS) writeFileSync(at(kernel.module), await makeWasm(kernel));
