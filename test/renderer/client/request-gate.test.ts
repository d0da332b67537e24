import { describe, expect, it } from "vitest";
import { RequestGate } from "#renderer/client/request-gate.ts";

describe("the request gate", () => {
  it("never lets more than its limit run, and starts the lowest rank first", async () => {
    const gate = new RequestGate(2);
    let running = 0;
    let most = 0;
    const order: number[] = [];
    const ends: (() => void)[] = [];
    const work = (rank: number) =>
      gate.pass(rank, async () => {
        running += 1;
        most = Math.max(most, running);
        order.push(rank);
        await new Promise<void>((end) => ends.push(end));
        running -= 1;
      });
    const all = [5, 5, 3, 1, 2].map(work);
    for (let i = 0; i < 5; i++) {
      await new Promise((tick) => setTimeout(tick, 0));
      ends.shift()!();
    }
    await Promise.all(all);
    expect(most).toBe(2);
    expect(order).toEqual([5, 5, 1, 2, 3]);
  });

  it("frees its place when work fails", async () => {
    const gate = new RequestGate(1);
    await expect(gate.pass(0, () => Promise.reject(new Error("no")))).rejects.toThrow("no");
    expect(await gate.pass(0, () => Promise.resolve(1))).toBe(1);
  });
});
