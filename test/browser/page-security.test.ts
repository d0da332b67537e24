import { mkdtemp, rm } from "node:fs/promises";
import { createServer } from "node:http";
import type { AddressInfo } from "node:net";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";

// What the security statements demand of a page, looked at from inside it in a real browser over the loopback server.
describe("the page in a browser", () => {
  let program: RunningProgram;
  let open: OpenPage;
  let profile: string;
  const asked: string[] = [];
  beforeAll(async () => {
    program = await startProgram();
    profile = await mkdtemp(join(tmpdir(), "tautline-profile-"));
    open = await openPage("about:blank", profile);
    open.context.on("request", (request) => void asked.push(request.url()));
    await open.page.goto(program.url);
    await open.page.waitForFunction(() => document.getElementById("app")!.childElementCount > 0);
  });
  afterAll(async () => {
    await open?.close();
    await program?.stop();
    if (profile) await rm(profile, { recursive: true, force: true, maxRetries: 5 });
  });

  it("asks its own server and nobody else", async () => {
    await open.page.waitForTimeout(1000);
    const origin = new URL(program.url).origin;
    expect(asked.length).toBeGreaterThan(2);
    expect(asked.filter((url) => new URL(url).origin !== origin && !url.startsWith("blob:"))).toEqual([]);
  });

  it("puts the token into no address that is sent, and wipes it from its own", async () => {
    const token = program.url.split("token=")[1]!;
    expect(asked.filter((url) => url.split("#")[0]!.includes(token))).toEqual([]);
    expect(open.page.url()).not.toContain(token);
    await open.page.reload();
    expect(await open.page.evaluate(async () => (await fetch("/api/hello")).status)).toBe(401);
  });

  it("has no Node and no way to make code out of text", async () => {
    expect(await open.page.evaluate(() => [typeof require, typeof process, typeof module])).toEqual([
      "undefined",
      "undefined",
      "undefined",
    ]);
    // In a timer: the browser lets a debugger's own call make code, whatever the page's policy says.
    const made = open.page.evaluate(
      () =>
        new Promise<string>((resolve) =>
          setTimeout(() => {
            try {
              resolve(String(new Function("return 1")()));
            } catch (error) {
              resolve((error as Error).name);
            }
          }),
        ),
    );
    expect(await made).toBe("EvalError");
  });

  it("runs no inline script, style or handler that was slipped in", async () => {
    const result = await open.page.evaluate(async () => {
      const script = document.createElement("script");
      script.textContent = "window.slippedIn = true";
      document.body.append(script);
      const image = document.createElement("div");
      image.innerHTML = '<img src="/none.png" onerror="window.slippedIn = true"><p id="styled" style="color: rgb(1, 2, 3)">x</p>';
      document.body.append(image);
      await new Promise((resolve) => setTimeout(resolve, 500));
      const colour = getComputedStyle(document.getElementById("styled")!).color;
      script.remove();
      image.remove();
      return { ran: "slippedIn" in window, colour };
    });
    expect(result.ran).toBe(false);
    expect(result.colour).not.toBe("rgb(1, 2, 3)");
  });

  it("reaches no other computer by fetch, picture, frame, worker or form, also when asked to", async () => {
    // Another origin on this computer stands in for the world: what is refused for it is refused for all.
    const heard: string[] = [];
    const world = createServer((request, answer) => {
      heard.push(request.url!);
      answer.end();
    });
    await new Promise<void>((resolve) => world.listen(0, "127.0.0.1", resolve));
    const elsewhere = `http://127.0.0.1:${(world.address() as AddressInfo).port}`;
    await open.page.evaluate(async (address) => {
      await fetch(`${address}/fetch`, { mode: "no-cors" }).catch(() => undefined);
      navigator.sendBeacon(`${address}/beacon`, "x");
      for (const kind of ["img", "iframe", "script", "audio"] as const) {
        const element = document.createElement(kind);
        element.src = `${address}/${kind}`;
        document.body.append(element);
        setTimeout(() => element.remove(), 400);
      }
      const style = document.createElement("link");
      Object.assign(style, { rel: "stylesheet", href: `${address}/style` });
      document.head.append(style);
      try {
        new Worker(`${address}/worker`);
        new WebSocket(address.replace("http", "ws"));
      } catch {
        // refused at once, as well
      }
      const form = document.createElement("form");
      Object.assign(form, { action: `${address}/form`, method: "post", target: "_blank" });
      document.body.append(form);
      form.submit();
      form.remove();
      await new Promise((resolve) => setTimeout(resolve, 800));
      style.remove();
    }, elsewhere);
    world.close();
    expect(heard).toEqual([]);
  });

  it("cannot be shown inside another page", async () => {
    const host = createServer((_request, answer) => {
      answer.setHeader("content-type", "text/html");
      answer.end(`<iframe src="${new URL(program.url).origin}/"></iframe>`);
    });
    await new Promise<void>((resolve) => host.listen(0, "127.0.0.1", resolve));
    const page = await open.context.newPage();
    await page.goto(`http://127.0.0.1:${(host.address() as AddressInfo).port}/`);
    await page.waitForTimeout(500);
    const inside = page.frames().find((frame) => frame !== page.mainFrame());
    expect(inside?.url().startsWith(program.url.split("#")[0]!) ?? false).toBe(false);
    await page.close();
    host.close();
  });

  it("says what to do when the server was started again: its key is not the new run's", async () => {
    const page = await open.context.newPage();
    await page.goto(`${program.url.split("#")[0]}#token=of-an-earlier-run`);
    await page.waitForFunction(() => /started again|address it printed/i.test(document.body.textContent), undefined, {
      timeout: 10_000,
    });
    await page.close();
  });
});
