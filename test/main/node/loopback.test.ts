import { connect, createServer } from "node:net";
import { afterEach, describe, expect, it } from "vitest";
import { CONNECTION_LIMITS, type Loopback, serveLoopback } from "#main/node/loopback.ts";

let server: Loopback | null = null;
afterEach(async () => {
  await server?.close();
  server = null;
});

async function serve(limits: Partial<Record<keyof typeof CONNECTION_LIMITS, number>> = {}): Promise<Loopback> {
  server = await serveLoopback({
    handlerFor: () => async (request) => {
      await request.arrayBuffer();
      return new Response("answered");
    },
    preferredPort: 0,
    token: "t",
    limits,
  });
  return server;
}

/** Sends bytes as they are; gives what came back until the connection was closed. */
function raw(port: number, bytes: string): Promise<string> {
  return new Promise((resolve, reject) => {
    const socket = connect(port, "127.0.0.1", () => socket.write(bytes));
    let answer = "";
    socket.on("data", (piece) => {
      answer += piece.toString();
    });
    socket.on("close", () => resolve(answer));
    socket.on("error", reject);
  });
}

describe("the loopback server's connections", () => {
  it("bound the size of headers", async () => {
    const { port } = await serve();
    const big = "x".repeat(CONNECTION_LIMITS.maxHeaderSize);
    expect(await raw(port, `GET / HTTP/1.1\r\nHost: 127.0.0.1:${port}\r\nX: ${big}\r\n\r\n`)).toMatch(/^HTTP\/1\.1 431 /);
  });

  it("bound the time a request's head and body may take", async () => {
    const { port } = await serve({ headersTimeout: 300, requestTimeout: 600, connectionsCheckingInterval: 100 });
    expect(await raw(port, "GET / HTTP/1.1\r\nHost: ")).toMatch(/^HTTP\/1\.1 408 /);
    const head = `POST / HTTP/1.1\r\nHost: 127.0.0.1:${port}\r\nContent-Length: 100\r\n\r\n`;
    expect(await raw(port, `${head}half`)).toMatch(/^HTTP\/1\.1 408 /);
  });

  it("have bounds that are numbers of seconds, not of hours", () => {
    for (const key of ["headersTimeout", "requestTimeout", "keepAliveTimeout"] as const) {
      expect(CONNECTION_LIMITS[key]).toBeGreaterThan(0);
      expect(CONNECTION_LIMITS[key]).toBeLessThanOrEqual(120_000);
    }
  });

  it("answer no proxy's target, no upgrade and no garbage", async () => {
    const { port } = await serve();
    const host = `Host: 127.0.0.1:${port}`;
    expect(await raw(port, `GET http://evil.example/ HTTP/1.1\r\n${host}\r\n\r\n`)).toMatch(/^HTTP\/1\.1 400 /);
    expect(await raw(port, `CONNECT evil.example:443 HTTP/1.1\r\n${host}\r\n\r\n`)).not.toContain("answered");
    const upgrade = `GET / HTTP/1.1\r\n${host}\r\nConnection: Upgrade\r\nUpgrade: websocket\r\n\r\n`;
    expect(await raw(port, upgrade)).toBe("");
    expect(await raw(port, "\0\0\0rubbish\r\n\r\n")).toMatch(/^HTTP\/1\.1 400 /);
  });

  it("end within a bound when the server closes, also those that are open, and free the port", async () => {
    const { port, close } = await serve();
    const open = raw(port, `POST / HTTP/1.1\r\nHost: 127.0.0.1:${port}\r\nContent-Length: 9\r\n\r\n`);
    await expect
      .poll(() => raw(port, `GET / HTTP/1.1\r\nHost: 127.0.0.1:${port}\r\nConnection: close\r\n\r\n`))
      .toContain("answered");
    await close();
    await open;
    const again = createServer();
    await new Promise<void>((resolve, reject) => again.once("error", reject).listen(port, "127.0.0.1", resolve));
    again.close();
  });
});
