// Runs the benchmarks whose path holds the given word (`npm run bench -- compare`), all of them without one. A benchmark
// is a file `*.bench.ts` beside its kernel that exports bench(print, cpuMs); it reports, it never fails a build.
import { readdirSync } from "node:fs";
import { cpus, totalmem } from "node:os";
import { fileURLToPath } from "node:url";
import { runnerImport } from "vite";

const root = fileURLToPath(new URL("../..", import.meta.url));
const word = process.argv[2] ?? "";
/** Words that stand for more than the paths that hold them: how tracing feels in the page is measured with the rest of the page. */
const ALSO = { tracing: ["browser/feel"] };
const words = [word, ...(ALSO[word] ?? [])];
const found = ["shared", "main", "renderer", "test"].flatMap((folder) =>
  readdirSync(`${root}/${folder}`, { recursive: true })
    .map((name) => `${folder}/${String(name).replaceAll("\\", "/")}`)
    .filter((name) => name.endsWith(".bench.ts") && words.some((each) => name.includes(each))),
);
if (found.length === 0) {
  console.error(`No benchmark's path holds '${word}'.`);
  process.exit(2);
}
console.log(
  `machine: ${cpus().length} x ${cpus()[0]?.model.trim()}, ${Math.round(totalmem() / 2 ** 30)} GiB, Node ${process.version}`,
);
const cpuMs = () => {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1000;
};
for (const name of found.sort()) {
  console.log(`\n# ${name}`);
  const { module } = await runnerImport(`${root}/${name}`, { root, configFile: false, logLevel: "error" });
  await module.bench((line) => console.log(line), cpuMs);
}
