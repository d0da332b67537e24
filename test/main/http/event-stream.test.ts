import { describe, expect, it } from "vitest";
import { EventStreams } from "#main/http/event-stream.ts";
import type { Ports } from "#main/http/ports.ts";
import type { ServerEvent } from "#shared/api/routes.ts";

function begun() {
  const listeners = new Set<(event: ServerEvent) => void>();
  const left: string[] = [];
  const ports = {
    events: {
      subscribe: (listener: (event: ServerEvent) => void) => {
        listeners.add(listener);
        return () => void listeners.delete(listener);
      },
    },
    windows: { seen: () => {}, left: (window: string) => void left.push(window) },
    jobs: { jobs: () => [] },
  } as unknown as Ports;
  return { ports, listeners, left };
}

describe("a window's event stream", () => {
  it("ends and lets go when its reader cancels it, or its request is gone, once", async () => {
    const { ports, listeners, left } = begun();
    const gone = new AbortController();
    const streams = new EventStreams(ports);
    const stream = streams.open("w1", gone.signal);
    expect(listeners.size).toBe(1);
    await stream.body!.cancel();
    gone.abort();
    expect([listeners.size, left]).toEqual([0, ["w1"]]);
    const early = new AbortController();
    early.abort();
    streams.open("w2", early.signal);
    expect([listeners.size, left]).toEqual([0, ["w1", "w2"]]);
  });

  it("is ended when its page says goodbye, and no other window's is", async () => {
    const { ports, listeners, left } = begun();
    const streams = new EventStreams(ports);
    const stay = new AbortController().signal;
    const [one, two] = [streams.open("w1", stay), streams.open("w1", stay)];
    streams.open("w2", stay);
    streams.close("w1");
    streams.close("w1");
    streams.close("none");
    expect([listeners.size, left]).toEqual([1, ["w1", "w1"]]);
    for (const stream of [one, two]) expect(await new Response(stream.body).text()).toBe('{"event":"beat"}\n');
  });

  it("is ended when a page reads nothing for too long, so that no memory grows without bound", async () => {
    const { ports, listeners, left } = begun();
    const stream = new EventStreams(ports).open("w1", new AbortController().signal);
    for (let i = 0; i < 20_000; i += 1) for (const listener of listeners) listener({ event: "shelf" });
    expect([listeners.size, left]).toEqual([0, ["w1"]]);
    const lines = (await new Response(stream.body).text()).trim().split("\n");
    expect(lines.length).toBeGreaterThan(1000);
    expect(lines.length).toBeLessThan(20_000);
  });
});
