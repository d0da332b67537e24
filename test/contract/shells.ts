import { request as httpRequest } from "node:http";
import { SCHEME_ACCESS } from "#main/electron/scheme-access.ts";
import { createHandler } from "#main/http/handler.ts";
import type { Ports } from "#main/http/ports.ts";
import { serveLoopback } from "#main/node/loopback.ts";
import { TOKEN_HEADER } from "#shared/api/routes.ts";

/** One way to reach the handler. */
export interface Shell {
  readonly name: string;
  readonly origin: string;
  /** True where requests need the run's token. */
  readonly needsToken: boolean;
  /** Sends a request whose target is exactly `target`, with the token unless headers name another. */
  send(target: string, init?: Sending): Promise<Response>;
  close(): Promise<void>;
}

export interface Sending {
  readonly method?: string;
  readonly headers?: Record<string, string>;
  readonly body?: string | Uint8Array;
  readonly signal?: AbortSignal;
}

export type OpenShell = (ports: Ports, onFault: (error: unknown) => void) => Promise<Shell>;

const TOKEN = "a-token-of-this-run";

/** The handler itself, as the app's own scheme calls it. */
export const bareHandler: OpenShell = async (ports, onFault) => {
  const access = SCHEME_ACCESS;
  const handler = createHandler(ports, { access, onFault });
  const origin = `${access.protocol}//${access.host}`;
  return {
    name: "bare handler",
    origin,
    needsToken: false,
    send: (target, init = {}) => handler(new Request(origin + target, init as RequestInit)),
    close: async () => {},
  };
};

/** The loopback server, spoken to byte for byte: fetch would tidy the target first. */
export const loopbackServer: OpenShell = async (ports, onFault) => {
  const server = await serveLoopback({
    handlerFor: (access) => createHandler(ports, { access, onFault }),
    preferredPort: 0,
    token: TOKEN,
  });
  return {
    name: "loopback server",
    origin: server.origin,
    needsToken: true,
    send: (target, { method = "GET", headers = {}, body, signal } = {}) =>
      new Promise((resolve, reject) => {
        const sent = httpRequest(
          {
            host: "127.0.0.1",
            port: server.port,
            path: target,
            method,
            headers: { [TOKEN_HEADER]: TOKEN, "content-length": String(Buffer.byteLength(body ?? "")), ...headers },
            ...(signal ? { signal } : {}),
          },
          (incoming) => {
            const status = incoming.statusCode!;
            const stream = new ReadableStream<Uint8Array>({
              start(controller) {
                incoming.on("data", (piece: Uint8Array) => controller.enqueue(new Uint8Array(piece)));
                incoming.on("end", () => controller.close());
                incoming.on("error", (error) => controller.error(error));
              },
              cancel: () => void incoming.destroy(),
            });
            const plain = new Headers();
            for (const [key, value] of Object.entries(incoming.headers)) plain.set(key, String(value));
            resolve(new Response([204, 304].includes(status) ? null : stream, { status, headers: plain }));
          },
        );
        sent.on("error", reject);
        sent.end(body);
      }),
    close: () => server.close(),
  };
};
