import { randomBytes } from "node:crypto";
import { homedir } from "node:os";
import { join, resolve } from "node:path";
import { fileURLToPath } from "node:url";
import { parseArgs } from "node:util";
import { createHandler } from "#main/http/handler.ts";
import { serveLoopback } from "#main/node/loopback.ts";
import { GRACE_MS } from "#main/node/window-life.ts";
import { openWorkplace } from "#main/node/workplace.ts";
import type { Engine } from "#shared/api/engine.ts";
import { TautlineError } from "#shared/errors.ts";

const { values } = parseArgs({
  options: { port: { type: "string" }, library: { type: "string" }, open: { type: "boolean" } },
  allowNegative: true,
});
const missing = async (): Promise<never> => {
  throw new TautlineError("internal", "This part of the program is not there yet.", { what: "missing" });
};
const engine = new Proxy({}, { get: (_, name) => (name === "close" ? async () => {} : missing) }) as Engine;
const fault = (error: unknown) => console.error(error);
const root = resolve(values.library ?? process.env.TAUTLINE_LIBRARY ?? join(homedir(), "Documents", "Tautline"));
const workplace = await openWorkplace({
  root,
  shell: "loopback",
  version: "0.1.0",
  page: fileURLToPath(new URL("../page", import.meta.url)),
  graceMs: GRACE_MS,
  onAllLeft: () => void stop(),
  onFault: fault,
  abilities: async () => ({
    engine,
    scans: { look: missing },
    intake: () => missing,
    demo: { find: async () => undefined, make: missing },
    exports: { exportTrees: missing },
  }),
});
const loopback = await serveLoopback({
  handlerFor: (access) => createHandler(workplace.ports, { access, onFault: fault }),
  preferredPort: Number(values.port ?? 47113),
  token: randomBytes(32).toString("base64url"),
});
console.log(loopback.url);
async function stop(): Promise<void> {
  await loopback.close();
  await workplace.close();
}
for (const signal of ["SIGINT", "SIGTERM"] as const) process.once(signal, () => void stop());
