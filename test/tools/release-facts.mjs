// Prints what a release has to be held against by hand: versions from the lock file, fuses as configured.
import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../..", import.meta.url));
const lock = JSON.parse(readFileSync(`${root}/package-lock.json`, "utf8"));
const { version, engines } = JSON.parse(readFileSync(`${root}/package.json`, "utf8"));
const electron = lock.packages["node_modules/electron"].version;
const fuses = /electronFuses:\n((?: {2}.*\n)+)/.exec(readFileSync(`${root}/electron-builder.yml`, "utf8"))?.[1] ?? "none found\n";

console.log(`Tautline ${version}, Node ${engines.node}`);
console.log(
  `Electron ${electron}: its major, ${electron.split(".")[0]}, must be one that its project still supports on the day of release.`,
);
console.log(`Fuses as configured:\n${fuses}`);
