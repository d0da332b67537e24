import { createServer, type Server } from "node:http";
import type { AddressInfo } from "node:net";
import { getRequestListener } from "@hono/node-server";
import type { Access } from "#main/http/access.ts";
import type { Handler } from "#main/http/handler.ts";

const ADDRESS = "127.0.0.1";

/** Bounds on what a connection may cost; times in milliseconds. */
export const CONNECTION_LIMITS = {
  maxHeaderSize: 16 * 1024,
  headersTimeout: 10_000,
  requestTimeout: 120_000,
  keepAliveTimeout: 75_000,
  connectionsCheckingInterval: 5_000,
} as const;
export const MOST_CONNECTIONS = 128;
/** Open requests get this long to end when the server closes. */
const CLOSE_WITHIN_MS = 1_000;

export interface LoopbackOptions {
  /** Makes the handler once the port, and so the host, is known. */
  readonly handlerFor: (access: Access) => Handler;
  /** Taken when it is free; any other otherwise. 0 = any. */
  readonly preferredPort: number;
  readonly token: string;
  /** Other bounds than {@link CONNECTION_LIMITS}. */
  readonly limits?: Partial<Record<keyof typeof CONNECTION_LIMITS, number>>;
}

export interface Loopback {
  readonly port: number;
  /** Scheme, address and port. */
  readonly origin: string;
  /** Ends the server within a bound; the port is free afterwards. */
  close(): Promise<void>;
}

/** Serves the handler on 127.0.0.1 alone. */
export async function serveLoopback(options: LoopbackOptions): Promise<Loopback> {
  let handler: Handler | null = null;
  const listener = getRequestListener((request) => handler!(request), { overrideGlobalObjects: false });
  const server = createServer({ ...CONNECTION_LIMITS, ...options.limits }, (incoming, outgoing) => {
    // A target that is no path ("http://other/", "*") is for proxies; this is none.
    if (!incoming.url?.startsWith("/")) {
      outgoing.writeHead(400, { connection: "close" }).end();
      return;
    }
    void listener(incoming, outgoing);
  });
  server.maxConnections = MOST_CONNECTIONS;
  server.on("upgrade", (_request, socket) => socket.destroy());
  const port = await listen(server, options.preferredPort);
  const host = `${ADDRESS}:${port}`;
  handler = options.handlerFor({ protocol: "http:", host, token: options.token });
  return {
    port,
    origin: `http://${host}`,
    close: () =>
      new Promise((resolve) => {
        server.close(() => resolve());
        server.closeIdleConnections();
        setTimeout(() => server.closeAllConnections(), CLOSE_WITHIN_MS).unref();
      }),
  };
}

/** The port the server listens on: the preferred one, or any when that is taken or forbidden. */
async function listen(server: Server, preferred: number): Promise<number> {
  const tryPort = (port: number) =>
    new Promise<void>((resolve, reject) => {
      server.once("error", reject);
      server.listen({ port, host: ADDRESS, exclusive: true }, () => {
        server.off("error", reject);
        resolve();
      });
    });
  try {
    await tryPort(preferred);
  } catch (error) {
    if (preferred === 0 || !["EADDRINUSE", "EACCES"].includes((error as NodeJS.ErrnoException).code ?? "")) throw error;
    await tryPort(0);
  }
  return (server.address() as AddressInfo).port;
}
