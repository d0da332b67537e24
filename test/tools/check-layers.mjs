// Holds every import against the table of layers. Fails too when it saw fewer modules than there are source files:
// a parser that silently sees none would pass everything.
import { readdirSync } from "node:fs";
import { createRequire } from "node:module";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../..", import.meta.url));
process.chdir(root);
const require = createRequire(import.meta.url);
// The import check's parser is never told that a file holds markup, and stops at the first tag: tell it by the file's name.
// It must be told before the checker loads the parser.
const swc = require("@swc/core");
const parseFileSync = swc.parseFileSync;
swc.parseFileSync = (file, settings) => parseFileSync(file, { ...settings, tsx: file.endsWith(".tsx") });
const { cruise } = await import("dependency-cruiser");

const { forbidden, options } = require("../../.dependency-cruiser.cjs");
const LAYERED = ["shared", "main", "renderer"];

const isSource = (name) => /\.tsx?$/.test(name) && !name.endsWith(".bench.ts") && !name.endsWith(".d.ts");
const sources = LAYERED.flatMap((folder) => readdirSync(folder, { recursive: true }).map(String).filter(isSource));
const { output } = await cruise(LAYERED, { ...options, ruleSet: { forbidden, options }, validate: true });
const seen = output.modules.filter(
  (module) => LAYERED.some((folder) => module.source.startsWith(`${folder}/`)) && isSource(module.source),
);
const broken = output.summary.violations.filter((violation) => violation.rule.severity === "error");
for (const violation of broken) console.error(`${violation.rule.name}: ${violation.from} -> ${violation.to}`);
if (seen.length < sources.length)
  console.error(`only ${seen.length} of ${sources.length} source files were seen by the import check`);
console.log(`layers: ${seen.length} modules, ${output.summary.totalDependenciesCruised} imports, ${broken.length} forbidden`);
process.exit(broken.length === 0 && seen.length >= sources.length ? 0 : 1);
