// Compiles assets/chordae-trees.schema.json ahead of time into plain code: the schema library's run-time compiler needs eval,
// which neither the page nor the sandbox allows. `node test/tools/make-schema-check.mjs` writes the file anew; a test compares.
import { readFileSync, writeFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { Ajv2020 } from "ajv/dist/2020.js";
import standaloneCode from "ajv/dist/standalone/index.js";

const at = (path) => fileURLToPath(new URL(`../../${path}`, import.meta.url));
export const SCHEMA_PATH = at("assets/chordae-trees.schema.json");
export const CHECK_PATH = at("shared/formats/chordae/schema-check.generated.ts");

/** The source text of the compiled check. It must import nothing: keywords that need a helper of the library are refused. */
export function makeSchemaCheck() {
  const schema = JSON.parse(readFileSync(SCHEMA_PATH, "utf8"));
  const ajv = new Ajv2020({
    code: { source: true, esm: true, lines: true },
    strict: true,
    allowUnionTypes: true,
    strictTypes: false,
  });
  const code = standaloneCode.default(ajv, ajv.compile(schema));
  if (/\brequire\(|\bimport\b/.test(code))
    throw new Error("the compiled check needs a run-time helper; avoid that keyword in the schema");
  return `// @ts-nocheck Compiled from assets/chordae-trees.schema.json by test/tools/make-schema-check.mjs; do not edit.\n${code}`;
}

if (process.argv[1] === fileURLToPath(import.meta.url)) writeFileSync(CHECK_PATH, makeSchemaCheck());
