import { describe, expect, it } from "vitest";
import { type BridgeActions, hostBridge } from "#main/electron/bridge-host.ts";
import { BRIDGE_CHANNELS, type BridgeReply } from "#shared/api/bridge.ts";
import { TautlineError } from "#shared/errors.ts";

interface Frame {
  url: string;
  parent: Frame | null;
}
type Answer = (event: { senderFrame: Frame | null }, argument: unknown) => Promise<BridgeReply<unknown>>;

function hosted(change: Partial<BridgeActions> = {}) {
  const channels = new Map<string, Answer>();
  const asked: unknown[] = [];
  const faults: unknown[] = [];
  const note = async (argument: unknown) => {
    asked.push(argument);
    return null;
  };
  const actions = { pickScan: note, pickSavePath: note, showInFolder: note, setMenu: note, ...change } as BridgeActions;
  const ipc = {
    handle: (channel: string, answer: Answer) => void channels.set(channel, answer),
    removeHandler: (channel: string) => void channels.delete(channel),
  };
  const undo = hostBridge(ipc as never, actions, (error) => void faults.push(error));
  return { channels, asked, faults, undo };
}

const OWN: Frame = { url: "tautline://app/", parent: null };

describe("the shell's side of the bridge", () => {
  it("listens on the channels of the map and on no other, and lets go of all of them", () => {
    const { channels, undo } = hosted();
    expect([...channels.keys()].sort()).toEqual(Object.values(BRIDGE_CHANNELS).sort());
    undo();
    expect(channels.size).toBe(0);
  });

  it("answers the top frame of the app's own page", async () => {
    const { channels, asked } = hosted();
    expect(await channels.get(BRIDGE_CHANNELS.pickScan)!({ senderFrame: OWN }, { folder: true })).toEqual({
      ok: true,
      value: null,
    });
    expect(asked).toEqual([{ folder: true }]);
  });

  it("answers a frame inside, a foreign page and a destroyed frame with an error, on every channel", async () => {
    const { channels, asked } = hosted();
    for (const senderFrame of [
      null,
      { url: "tautline://app/", parent: OWN },
      { url: "https://evil.example/", parent: null },
      { url: "tautline://app.evil/", parent: null },
      { url: "", parent: null },
    ]) {
      for (const answer of channels.values()) {
        expect(await answer({ senderFrame }, { folder: true })).toMatchObject({ ok: false, error: { tag: "token-refused" } });
      }
    }
    expect(asked).toEqual([]);
  });

  it("refuses arguments of another shape", async () => {
    const { channels, asked } = hosted();
    const call = (name: keyof typeof BRIDGE_CHANNELS, argument: unknown) =>
      channels.get(BRIDGE_CHANNELS[name])!({ senderFrame: OWN }, argument);
    for (const [name, argument] of [
      ["pickScan", undefined],
      ["pickScan", { folder: "yes" }],
      ["pickScan", { folder: true, more: 1 }],
      ["pickSavePath", { suggestedName: "../x" }],
      ["pickSavePath", { suggestedName: "a\\b" }],
      ["pickSavePath", { suggestedName: "" }],
      ["showInFolder", { path: 5 }],
      ["setMenu", { menus: [{ label: "x", items: [{ kind: "role", role: "quit" }] }] }],
      ["setMenu", { menus: "x" }],
    ] as const) {
      expect([name, await call(name, argument)]).toMatchObject([name, { ok: false, error: { tag: "bad-request" } }]);
    }
    expect(asked).toEqual([]);
    expect(await call("setMenu", { menus: [{ label: "Edit", items: [{ kind: "line" }] }] })).toMatchObject({ ok: true });
  });

  it("sends errors as tag and sentence; a fault of the program is told inside and not to the page", async () => {
    const { channels, faults } = hosted({
      pickScan: async () => {
        throw new Error("/home/someone/secret");
      },
      showInFolder: async () => {
        throw new TautlineError("not-found", "There is no such file.", { what: "file", id: "x" });
      },
    });
    const reply = await channels.get(BRIDGE_CHANNELS.pickScan)!({ senderFrame: OWN }, { folder: false });
    expect(reply).toMatchObject({ ok: false, error: { tag: "internal" } });
    expect(JSON.stringify(reply)).not.toContain("secret");
    expect(faults).toHaveLength(1);
    const expected = await channels.get(BRIDGE_CHANNELS.showInFolder)!({ senderFrame: OWN }, { path: "/x" });
    expect(expected).toMatchObject({ ok: false, error: { tag: "not-found", message: "There is no such file." } });
    expect(faults).toHaveLength(1);
  });
});
