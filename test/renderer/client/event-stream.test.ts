import { describe, expect, it } from "vitest";
import { type ConnectionState, keepEventStream, SILENCE_MS } from "#renderer/client/event-stream.ts";
import type { ServerEvent } from "#shared/api/routes.ts";
import { TautlineError } from "#shared/errors.ts";

/** Timers that the test fires by hand. */
function handTimers() {
  const timers: { action: () => void; ms: number }[] = [];
  return {
    timers,
    setTimer: (action: () => void, ms: number) => {
      const timer = { action, ms };
      timers.push(timer);
      return timer;
    },
    clearTimer: (timer: unknown) => {
      const at = timers.indexOf(timer as (typeof timers)[number]);
      if (at >= 0) timers.splice(at, 1);
    },
  };
}

const settle = () => new Promise((resolve) => setTimeout(resolve, 0));

describe("the event stream", () => {
  it("gives whole events from lines cut anywhere, and passes over what it does not understand", async () => {
    const clock = handTimers();
    const events: ServerEvent[] = [];
    const states: ConnectionState[] = [];
    let push!: (text: string) => void;
    const stream = new ReadableStream<Uint8Array>({
      start(controller) {
        push = (text) => controller.enqueue(new TextEncoder().encode(text));
      },
    });
    const stop = keepEventStream({
      ...clock,
      open: () => Promise.resolve(stream),
      onEvent: (event) => events.push(event),
      onState: (state) => states.push(state),
    });
    await settle();
    push('{"event":"sh');
    push('elf"}\nnot json\n{"event":"beat"}\n');
    await settle();
    expect(events).toEqual([{ event: "shelf" }, { event: "beat" }]);
    expect(states).toEqual(["connecting", "up"]);
    stop();
  });

  it("connects again after a break, waiting longer each time", async () => {
    const clock = handTimers();
    const states: ConnectionState[] = [];
    const stop = keepEventStream({
      ...clock,
      open: () => Promise.reject(new Error("refused")),
      onEvent: () => undefined,
      onState: (state) => states.push(state),
    });
    await settle();
    const first = clock.timers.shift()!;
    first.action();
    await settle();
    const second = clock.timers.shift()!;
    expect(second.ms).toBeGreaterThan(first.ms);
    expect(states).toEqual(["connecting", "away", "away"]);
    stop();
  });

  it("tells a restarted server from one that is away", async () => {
    const states: ConnectionState[] = [];
    const stop = keepEventStream({
      ...handTimers(),
      open: () => Promise.reject(new TautlineError("token-refused", "no", { reason: "other run" })),
      onEvent: () => undefined,
      onState: (state) => states.push(state),
    });
    await settle();
    expect(states.at(-1)).toBe("restarted");
    stop();
  });

  it("takes a silent stream for dead", async () => {
    const clock = handTimers();
    const states: ConnectionState[] = [];
    const stop = keepEventStream({
      ...clock,
      open: () => Promise.resolve(new ReadableStream<Uint8Array>({})),
      onEvent: () => undefined,
      onState: (state) => states.push(state),
    });
    await settle();
    const silence = clock.timers.find((timer) => timer.ms === SILENCE_MS)!;
    silence.action();
    await settle();
    expect(states.at(-1)).toBe("away");
    stop();
  });
});
