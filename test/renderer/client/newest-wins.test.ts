import { describe, expect, it } from "vitest";
import { NewestWins } from "#renderer/client/newest-wins.ts";
import { TautlineError } from "#shared/errors.ts";

/** A request whose answer the test gives by hand. */
function held<T>() {
  let answer!: (value: T) => void;
  let fail!: (error: unknown) => void;
  const promise = new Promise<T>((resolve, reject) => {
    answer = resolve;
    fail = reject;
  });
  return { promise, answer, fail };
}

describe("newest wins", () => {
  it("keeps one request under way and lets the newest take the waiting place", async () => {
    const lines = new NewestWins();
    const first = held<string>();
    const sent: number[] = [];
    const send = (wait: Promise<string>) => (number: number) => {
      sent.push(number);
      return wait;
    };
    const a = lines.run("guide", send(first.promise));
    const b = lines.run("guide", send(Promise.resolve("b")));
    const c = lines.run("guide", send(Promise.resolve("c")));
    expect(await b).toBeNull();
    first.answer("a");
    expect(await a).toBe("a");
    expect(await c).toBe("c");
    expect(sent).toEqual([1, 3]);
  });

  it("drops an answer that arrives after a newer one", async () => {
    const lines = new NewestWins();
    const slow = held<string>();
    const a = lines.run("section", () => slow.promise);
    const b = lines.run("section", () => Promise.resolve("b"), true);
    expect(await b).toBe("b");
    slow.answer("late");
    expect(await a).toBeNull();
  });

  it("says nothing when the server calls a request superseded, and throws every other failure", async () => {
    const lines = new NewestWins();
    const superseded = new TautlineError("superseded", "superseded", { lane: "guide", number: 1 });
    expect(await lines.run("guide", () => Promise.reject(superseded))).toBeNull();
    await expect(lines.run("guide", () => Promise.reject(new Error("no")))).rejects.toThrow("no");
    expect(await lines.run("guide", () => Promise.resolve(1))).toBe(1);
  });

  it("keeps lines apart", async () => {
    const lines = new NewestWins();
    const wait = held<number>();
    const a = lines.run("strip", () => wait.promise);
    expect(await lines.run("film", () => Promise.resolve(2))).toBe(2);
    wait.answer(1);
    expect(await a).toBe(1);
  });

  it("forgets a dropped line's waiting and coming answers", async () => {
    const lines = new NewestWins();
    const wait = held<number>();
    const a = lines.run("guide", () => wait.promise);
    const b = lines.run("guide", () => Promise.resolve(2));
    lines.drop("guide");
    expect(await b).toBeNull();
    wait.answer(1);
    expect(await a).toBeNull();
  });
});
