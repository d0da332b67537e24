// Makes what the README takes from the program: pictures (from the built program and the demo valve) and the key list.
// npm run pictures          both
// npm run pictures -- keys  the key list alone
import { readFileSync, writeFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { runnerImport } from "vite";

const root = fileURLToPath(new URL("../..", import.meta.url));
const load = async (path) => (await runnerImport(`${root}/${path}`, { root, configFile: false, logLevel: "error" })).module;

const { withKeyList } = await load("test/tools/readme-keys.ts");
const readme = `${root}/README.md`;
writeFileSync(readme, withKeyList(readFileSync(readme, "utf8")));
console.log("README.md: key list");

if (process.argv[2] !== "keys") {
  const { takePictures } = await load("test/browser/take-pictures.ts");
  await takePictures(`${root}/assets/pictures`, (line) => console.log(line));
}
