import { describe, expect, it } from "vitest";
import { IDLE_THRESHOLD_MS, workMsOf } from "#shared/log/effort.ts";
import type { LogRecord } from "#shared/log/records.ts";

function at(mono: number, session = "w1", state?: "opened" | "closed" | "idle"): LogRecord {
  const rest = state ? { kind: "session" as const, body: { state } } : { kind: "mark" as const, body: { name: "m" } };
  // The wall clock goes backwards on purpose: it must not matter.
  return { seq: 0, parent: 0, prev: "", t: 1_000_000 - mono, mono, session, label: "", ...rest };
}

describe("time at work", () => {
  it("is the time between records of one session", () => {
    expect(workMsOf([at(0), at(30_000), at(50_000)])).toBe(50_000);
  });
  it("leaves out gaps longer than two minutes, whole", () => {
    expect(IDLE_THRESHOLD_MS).toBe(120_000);
    expect(workMsOf([at(0), at(120_000), at(240_001), at(250_001)])).toBe(130_000);
  });
  it("leaves out what follows an idle or closed record", () => {
    expect(workMsOf([at(0, "w1", "opened"), at(10_000, "w1", "idle"), at(60_000), at(61_000)])).toBe(11_000);
  });
  it("does not count between sessions, whose clocks have nothing in common", () => {
    expect(workMsOf([at(0, "w1"), at(5_000, "w1"), at(5_500, "w2"), at(7_500, "w2")])).toBe(7_000);
  });
  it("ignores a session clock that goes backwards", () => {
    expect(workMsOf([at(9_000), at(1_000), at(2_000)])).toBe(1_000);
  });
});
