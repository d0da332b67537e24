import { mkdtemp, readFile, rm } from "node:fs/promises";
import { createServer } from "node:http";
import type { AddressInfo } from "node:net";
import { tmpdir } from "node:os";
import { extname, join } from "node:path";
import { fileURLToPath } from "node:url";
import preact from "@preact/preset-vite";
import { type Browser, chromium, type Page } from "playwright-core";
import { build } from "vite";

const TYPES: Record<string, string> = { ".html": "text/html", ".js": "text/javascript", ".css": "text/css" };

export interface TestPage {
  readonly browser: Browser;
  /** @param query for example "?theme=light" */
  open(query?: string, size?: { width: number; height: number }, scale?: number): Promise<Page>;
  close(): Promise<void>;
}

/** Builds a folder's test page, serves it on a free port of this computer and starts a browser for it. */
export async function openTestPage(folder: URL, browserPath: string, args: readonly string[] = []): Promise<TestPage> {
  const outDir = await mkdtemp(join(tmpdir(), "tautline-page-"));
  await build({
    root: fileURLToPath(folder),
    configFile: false,
    logLevel: "error",
    base: "./",
    publicDir: false,
    plugins: [preact({ prefreshEnabled: false, devToolsEnabled: false })],
    build: { outDir, emptyOutDir: true, target: "chrome120", minify: false, chunkSizeWarningLimit: 4000 },
  });
  const server = createServer(async (request, response) => {
    const name = new URL(request.url ?? "/", "http://localhost").pathname;
    try {
      const bytes = await readFile(join(outDir, name === "/" ? "index.html" : name));
      response.writeHead(200, { "content-type": TYPES[extname(name)] ?? "text/html" }).end(bytes);
    } catch {
      response.writeHead(404).end();
    }
  });
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  const { port } = server.address() as AddressInfo;
  const browser = await chromium.launch({ executablePath: browserPath, args: ["--no-sandbox", ...args] });
  return {
    browser,
    async open(query = "", size = { width: 1280, height: 800 }, scale = 1) {
      const context = await browser.newContext({ viewport: size, deviceScaleFactor: scale });
      const page = await context.newPage();
      page.on("pageerror", (error) => {
        throw error;
      });
      await page.goto(`http://127.0.0.1:${port}/${query}`);
      return page;
    },
    async close() {
      await browser.close();
      server.closeAllConnections();
      await new Promise((resolve) => server.close(resolve));
      await rm(outDir, { recursive: true, force: true });
    },
  };
}
