// Type-checks each environment on its own: what `shared/` uses must exist in a browser, a worker and Node alike.
import { spawnSync } from "node:child_process";
import { readdirSync } from "node:fs";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../..", import.meta.url));
const projects = readdirSync(root).filter((name) => /^tsconfig\.(?!base|json).+\.json$/.test(name) && name !== "tsconfig.json");
let failed = 0;
for (const project of projects) {
  const run = spawnSync(process.execPath, ["node_modules/typescript/bin/tsc", "-p", project], { cwd: root, encoding: "utf8" });
  if (run.status !== 0) {
    failed += 1;
    console.error(`${project}\n${run.stdout}${run.stderr}`);
  }
}
console.log(`types: ${projects.length} environments checked, ${failed} failed`);
process.exit(failed === 0 ? 0 : 1);
