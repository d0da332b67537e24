// Builds everything the program runs: Node bundles (each self-contained), the sandboxed preload, and the page.
import { copyFileSync, existsSync } from "node:fs";
import { rm } from "node:fs/promises";
import { builtinModules } from "node:module";
import { dirname, join, resolve } from "node:path";
import { build } from "vite";

const root = import.meta.dirname ?? new URL(".", import.meta.url).pathname;
/** Another place for work on the tests themselves: `<folder>/dist`; the program wants its package.json beside it. */
const dist = resolve(root, process.env.TAUTLINE_DIST ?? "dist");
if (!existsSync(join(dirname(dist), "package.json")))
  copyFileSync(join(root, "package.json"), join(dirname(dist), "package.json"));
const nodeBuiltins = [...builtinModules, ...builtinModules.map((name) => `node:${name}`)];
const entries = {
  cli: "main/cli/cli.ts",
  server: "main/cli/server.ts",
  electron: "main/electron/main.ts",
  "engine-worker": "main/engine/worker.ts",
  "intake-worker": "main/intake/worker.ts",
};

await rm(dist, { recursive: true, force: true });

/** One bundle an entry, so that workers and the server carry no bare import. */
for (const [name, file] of Object.entries(entries)) {
  if (!existsSync(`${root}/${file}`)) continue;
  await build({
    root,
    configFile: false,
    logLevel: "warn",
    publicDir: false,
    ssr: { noExternal: true, external: ["electron"] },
    build: {
      ssr: true,
      outDir: join(dist, "main"),
      emptyOutDir: false,
      target: "node20",
      minify: false,
      rollupOptions: {
        input: { [name]: file },
        external: [...nodeBuiltins, "electron"],
        output: {
          format: "es",
          entryFileNames: "[name].mjs",
          codeSplitting: false,
          banner: name === "cli" ? "#!/usr/bin/env node" : "",
        },
      },
    },
  });
}

if (existsSync(`${root}/main/preload/preload.ts`)) {
  await build({
    root,
    configFile: false,
    logLevel: "warn",
    publicDir: false,
    build: {
      outDir: join(dist, "preload"),
      emptyOutDir: false,
      target: "chrome130",
      minify: false,
      lib: { entry: "main/preload/preload.ts", formats: ["cjs"], fileName: () => "preload.cjs" },
      rollupOptions: { external: ["electron"] },
    },
  });
}

if (existsSync(`${root}/renderer/index.html`))
  await build({
    root: `${root}/renderer`,
    configFile: `${root}/vite.config.ts`,
    logLevel: "warn",
    build: { outDir: join(dist, "page") },
  });
