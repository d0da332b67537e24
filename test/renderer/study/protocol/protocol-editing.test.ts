import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import { ProtocolEditing } from "#renderer/study/protocol/protocol-editing.ts";
import { beginningProtocol, type ProtocolContent } from "#shared/study/protocol.ts";

describe("a protocol that is being typed", () => {
  let saved: ProtocolContent[];
  let fails: string | null;
  let editing: ProtocolEditing;

  beforeEach(() => {
    vi.useFakeTimers();
    saved = [];
    fails = null;
    editing = new ProtocolEditing(beginningProtocol(), async (content) => {
      if (fails === null) saved.push(content);
      return fails;
    });
  });
  afterEach(() => vi.useRealTimers());

  it("is written once the keys rest, and once for many keys", async () => {
    editing.change({ remarks: "a" });
    editing.change({ remarks: "ab" });
    expect(editing.state.value.kind).toBe("saving");
    await vi.advanceTimersByTimeAsync(5_000);
    expect(saved.map(({ drawing }) => drawing.remarks)).toEqual(["ab"]);
    expect(editing.state.value.kind).toBe("saved");
  });

  it("is not written while a part of it cannot be understood, and keeps what was typed", async () => {
    editing.change({ margin: "wide" });
    expect(await editing.flush()).toBe(false);
    expect(saved).toEqual([]);
    expect(editing.state.value).toMatchObject({ kind: "problems", problems: [expect.stringContaining("Margin")] });
    expect(editing.draft.value.margin).toBe("wide");
    editing.change({ margin: "0.3" });
    expect(await editing.flush()).toBe(true);
    expect(saved.at(-1)?.analysis.marginMm).toBe(0.3);
  });

  it("says why it was not saved, and is written when it is tried again", async () => {
    fails = "The disk is full.";
    editing.change({ remarks: "a" });
    expect(await editing.flush()).toBe(false);
    expect(editing.state.value).toEqual({ kind: "failed", message: "The disk is full." });
    fails = null;
    expect(await editing.flush()).toBe(true);
    expect(saved).toHaveLength(1);
  });

  it("never lets an older text arrive after a newer one", async () => {
    const arrived: string[] = [];
    let release = () => {};
    const slow = new ProtocolEditing(beginningProtocol(), async ({ drawing }) => {
      if (arrived.length === 0) await new Promise<void>((resolve) => (release = resolve));
      arrived.push(drawing.remarks);
      return null;
    });
    slow.change({ remarks: "first" });
    const first = slow.flush();
    slow.change({ remarks: "second" });
    const second = slow.flush();
    release();
    await first;
    expect(await second).toBe(true);
    expect(arrived).toEqual(["first", "second"]);
  });
});
