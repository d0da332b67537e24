// Makes the README's pictures from the built program and the demo valve: npm run pictures.
import { fileURLToPath } from "node:url";
import { runnerImport } from "vite";

const root = fileURLToPath(new URL("../..", import.meta.url));
const { module } = await runnerImport(`${root}/test/browser/take-pictures.ts`, { root, configFile: false, logLevel: "error" });
await module.takePictures(`${root}/assets/pictures`, (line) => console.log(line));
