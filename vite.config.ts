import preact from "@preact/preset-vite";
import { defineConfig } from "vite";

export default defineConfig({
  plugins: [preact({ prefreshEnabled: false, devToolsEnabled: false })],
  base: "./",
  publicDir: false,
  worker: { format: "es" },
  build: { outDir: "../dist/page", emptyOutDir: true, target: "chrome120", assetsInlineLimit: 0, chunkSizeWarningLimit: 1500 },
});
