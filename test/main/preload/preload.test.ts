import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { runInNewContext } from "node:vm";
import { describe, expect, it } from "vitest";
import { BRIDGE_CHANNELS, COMMAND_CHANNEL } from "#shared/api/bridge.ts";

const built = readFileSync(fileURLToPath(new URL("../../../dist/preload/preload.cjs", import.meta.url)), "utf8");

/** Runs the built preload as the sandbox does: one script, and a `require` that knows `electron` alone. */
function preloaded() {
  const required: string[] = [];
  const exposed = new Map<string, Record<string, (...args: unknown[]) => unknown>>();
  const invoked: unknown[][] = [];
  const listeners = new Map<string, (...args: unknown[]) => void>();
  const electron = {
    contextBridge: { exposeInMainWorld: (name: string, api: never) => void exposed.set(name, api) },
    ipcRenderer: {
      invoke: async (...args: unknown[]) => invoked.push(args),
      on: (channel: string, listener: never) => void listeners.set(channel, listener),
      removeListener: (channel: string, listener: unknown) =>
        void (listeners.get(channel) === listener && listeners.delete(channel)),
    },
    webUtils: { getPathForFile: (file: { path: string }) => file.path },
  };
  const require = (name: string) => {
    required.push(name);
    if (name !== "electron") throw new Error(`a sandboxed preload may not require ${name}`);
    return electron;
  };
  runInNewContext(built, { require, module: { exports: {} }, exports: {}, Object });
  return { required, exposed, invoked, listeners };
}

describe("the built preload", () => {
  it("requires electron alone", () => {
    expect(preloaded().required).toEqual(["electron"]);
  });

  it("gives the page a frozen list of named functions and nothing else", () => {
    const { exposed } = preloaded();
    expect([...exposed.keys()]).toEqual(["tautline"]);
    const bridge = exposed.get("tautline")!;
    expect(Object.keys(bridge).sort()).toMatchInlineSnapshot(`
      [
        "onCommand",
        "pathOfDropped",
        "pickSavePath",
        "pickScan",
        "setMenu",
        "showInFolder",
      ]
    `);
    expect(Object.isFrozen(bridge)).toBe(true);
    for (const value of Object.values(bridge)) expect(typeof value).toBe("function");
  });

  it("sends each call on its own channel with the one argument", async () => {
    const { exposed, invoked } = preloaded();
    const bridge = exposed.get("tautline")!;
    for (const [name, channel] of Object.entries(BRIDGE_CHANNELS)) {
      await bridge[name]!({ a: 1 }, "a second argument");
      expect(invoked.pop()).toEqual([channel, { a: 1 }]);
    }
    expect(bridge.pathOfDropped!({ path: "/scan.nrrd" })).toBe("/scan.nrrd");
  });

  it("hands a chosen command on as plain text, without the event, until it is told to stop", () => {
    const { exposed, listeners } = preloaded();
    const heard: unknown[][] = [];
    const stop = exposed.get("tautline")!.onCommand!((...args: unknown[]) => void heard.push(args)) as () => void;
    listeners.get(COMMAND_CHANNEL)!({ sender: "the event" }, "undo");
    expect(heard).toEqual([["undo"]]);
    stop();
    expect(listeners.size).toBe(0);
  });
});
