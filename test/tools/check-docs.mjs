// Every function, class and constant that `shared/` exports stands under a docblock: it is what kernels' callers read.
import { readdirSync, readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../../shared", import.meta.url));
const EXPORT = /^export (?:abstract )?(?:async )?(function\*?|class|const|let|enum) (\w+)/;
let seen = 0;
const bare = [];
for (const name of readdirSync(root, { recursive: true }).map(String).sort()) {
  if (!name.endsWith(".ts") || name.includes(".generated.") || name.endsWith(".bench.ts")) continue;
  const lines = readFileSync(`${root}/${name}`, "utf8").split("\n");
  lines.forEach((line, k) => {
    const found = EXPORT.exec(line);
    if (!found) return;
    seen += 1;
    const overloaded = lines[k - 1]?.startsWith(`export function ${found[2]}`);
    if (!overloaded && !lines[k - 1]?.trim().endsWith("*/")) bare.push(`shared/${name}:${k + 1} ${found[2]}`);
  });
}
for (const place of bare) console.error(`no docblock: ${place}`);
console.log(`docs: ${seen} exports of shared/, ${bare.length} without a docblock`);
process.exit(bare.length === 0 ? 0 : 1);
