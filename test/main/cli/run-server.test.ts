import { chmod, mkdir, readdir, readFile, stat, writeFile } from "node:fs/promises";
import { createServer } from "node:net";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { diskFiles } from "#main/node/disk-files.ts";
import { processFacts, takeLease } from "#main/node/lease.ts";
import { TOKEN_HEADER } from "#shared/api/routes.ts";
import { type Place, place, type RunningServer, startServer } from "#test/main/cli/start-server.ts";
import { countingBytes } from "#test/main/node/sample-log.ts";

let where: Place;
const started: RunningServer[] = [];
beforeEach(async () => {
  where = await place();
});
afterEach(async () => {
  for (const server of started.splice(0)) {
    if (server.child.exitCode === null) server.child.kill("SIGKILL");
    await server.ended;
  }
  await where.remove();
});

async function start(args?: readonly string[], env: Record<string, string> = {}): Promise<RunningServer> {
  const server = await startServer({ ...where, env: { ...where.env, ...env } }, args);
  started.push(server);
  return server;
}

/** An open event stream, as a page holds one. */
async function openPage({ origin, token }: RunningServer, window: string): Promise<AbortController> {
  const page = new AbortController();
  const answer = await fetch(`${origin}/api/events?window=${window}`, {
    headers: { [TOKEN_HEADER]: token },
    signal: page.signal,
  });
  await answer.body!.getReader().read();
  return page;
}

function portIsFree(port: number): Promise<boolean> {
  return new Promise((resolve) => {
    const server = createServer();
    server.once("error", () => resolve(false));
    server.listen(port, "127.0.0.1", () => server.close(() => resolve(true)));
  });
}

const portOf = ({ origin }: RunningServer) => Number(new URL(origin).port);

describe("npm start without the Electron binary", () => {
  it("says in one line what it does instead, and the page opens by its address", async () => {
    const server = await start();
    const lines = server.output().trim().split("\n");
    expect(lines).toHaveLength(2);
    expect(lines[0]).toBe(
      "The Electron binary is not installed here and there is no display: open this address in a browser on this computer.",
    );
    expect(await (await fetch(server.origin)).text()).toContain("<title>Tautline</title>");
    expect((await server.call("GET", "/api/hello")).answer).toMatchObject({ shell: "loopback", library: where.library });
  });

  it("opens an app window in an installed browser where there is a display, the token not on its command line", async () => {
    const told = join(where.folder, "told.txt");
    const browser = join(where.folder, "browser");
    await writeFile(browser, `#!/bin/sh\nprintf '%s\\n' "$@" > "${told}.part"; mv "${told}.part" "${told}"\n`);
    await chmod(browser, 0o755);
    const server = await start(["--port", "0"], { DISPLAY: ":99", TAUTLINE_BROWSER: browser });
    expect(server.output()).toMatch(/^The Electron binary is not installed here: the page opens in a browser window/);
    await expect.poll(() => readFile(told, "utf8").catch(() => ""), { timeout: 10_000 }).not.toBe("");
    const args = (await readFile(told, "utf8")).split("\n");
    const opener = args.find((arg) => arg.startsWith("--app=file://"))!.slice("--app=".length);
    expect(args.join("\n")).not.toContain(server.token);
    expect(await readFile(new URL(opener), "utf8")).toContain(`${server.origin}/#token=${server.token}`);
    expect((await stat(new URL(opener))).mode & 0o077).toBe(0);
  });

  it("says the address when there is a display but no browser of the family", async () => {
    const server = await start(["--port", "0"], { DISPLAY: ":99", TAUTLINE_BROWSER: join(where.folder, "none") });
    expect(server.output()).toMatch(/^The Electron binary is not installed here: open this address in a browser/);
    expect((await fetch(server.origin)).status).toBe(200);
  });

  it("opens by its address also where the user's private folder cannot be written", async () => {
    await writeFile(join(where.folder, "state"), "a file in its place");
    const server = await start();
    expect((await server.call("GET", "/api/hello")).status).toBe(200);
    server.child.kill("SIGINT");
    expect(await server.ended).toBe(0);
  });

  it("takes another port when the preferred one is taken", async () => {
    const other = createServer();
    await new Promise<void>((resolve) => other.listen(0, "127.0.0.1", resolve));
    const taken = (other.address() as { port: number }).port;
    const server = await start(["--port", String(taken)]);
    expect(portOf(server)).not.toBe(taken);
    expect((await server.call("GET", "/api/hello")).status).toBe(200);
    other.close();
  });

  it("listens on 127.0.0.1 alone", async () => {
    const server = await start();
    const port = portOf(server).toString(16).toUpperCase().padStart(4, "0");
    const listening = async (table: string) => {
      const lines = (await readFile(table, "utf8").catch(() => "")).split("\n").map((line) => line.trim().split(/\s+/));
      return lines.filter(([, local, , state]) => local?.endsWith(`:${port}`) && state === "0A").map(([, local]) => local);
    };
    if (process.platform !== "linux") return console.log("skipped: only Linux tells its sockets in /proc/net/tcp");
    expect(await listening("/proc/net/tcp")).toEqual([`0100007F:${port}`]);
    expect(await listening("/proc/net/tcp6")).toEqual([]);
  });

  it("hands a second start over to the instance that has the library open", async () => {
    const first = await start();
    const second = await start(["--port", "0"]);
    expect(await second.ended).toBe(0);
    expect(second.output()).toMatch(/^Tautline is already running on this library/);
    expect([second.origin, second.token]).toEqual([first.origin, first.token]);
    expect((await first.call("GET", "/api/hello")).status).toBe(200);
  });

  it("does not open a library that another process of the program is writing to", async () => {
    await mkdir(where.library, { recursive: true });
    const random = countingBytes();
    const path = join(where.library, "lease.json");
    const lease = await takeLease({ files: diskFiles(), path, what: "intake", facts: processFacts(), random });
    const server = await start();
    expect(await server.ended).toBe(3);
    expect(server.output()).toMatch(/open in another place for writing \(intake, process \d+/);
    await lease.release();
  });

  it("ends on Ctrl-C, page open or not, with the port free and nothing left behind", async () => {
    for (const withPage of [false, true]) {
      const server = await start();
      if (withPage) await openPage(server, "w1").then((page) => page.signal.addEventListener("abort", () => {}));
      server.child.kill("SIGINT");
      expect(await server.ended).toBe(0);
      expect(await portIsFree(portOf(server))).toBe(true);
      expect(await readdir(where.library)).not.toContain("lease.json");
      expect(await readdir(join(where.folder, "state"))).toEqual([]);
    }
  });

  it("ends a grace period after the last page was closed; a reload is not a close", async () => {
    const server = await start(["--port", "0", "--grace", "2"]);
    const page = await openPage(server, "w1");
    page.abort();
    const again = await openPage(server, "w2");
    await new Promise((resolve) => setTimeout(resolve, 2500));
    expect(server.child.exitCode).toBeNull();
    again.abort();
    expect(await server.ended).toBe(0);
    expect(await portIsFree(portOf(server))).toBe(true);
  });

  it("reports all wrong options together and opens nothing", async () => {
    const server = await start(["--port", "nine", "--colour", "x", "--library"]);
    expect(await server.ended).toBe(2);
    for (const fault of ["--port must be a whole number", "unknown option --colour", "--library needs a value", "'x'"]) {
      expect(server.output()).toContain(fault);
    }
    const help = await start(["--help"]);
    expect(await help.ended).toBe(0);
    expect(help.output()).toContain("not a medical device");
    await expect(stat(where.library)).rejects.toMatchObject({ code: "ENOENT" });
  });

  it("says so when the library's folder cannot be made", async () => {
    await writeFile(where.library, "a file");
    const server = await start();
    expect(await server.ended).toBe(3);
    expect(server.output()).not.toContain(" at ");
    expect(server.output()).toMatch(/library/);
  });
});
