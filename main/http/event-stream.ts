import { COMMON_HEADERS } from "#main/http/headers.ts";
import type { Ports } from "#main/http/ports.ts";
import type { ServerEvent } from "#shared/api/routes.ts";

/** Events a page may leave unread before its stream is ended; it then opens a new one and asks for what it shows anew. */
const UNREAD_LIMIT = 10_000;

/** The open event streams, by window, so that a page that says goodbye ends its own: not every shell tells that it has gone. */
export class EventStreams {
  readonly #ports: Pick<Ports, "events" | "jobs" | "windows">;
  readonly #ends = new Map<string, Set<() => void>>();

  constructor(ports: Pick<Ports, "events" | "jobs" | "windows">) {
    this.#ports = ports;
  }

  /**
   * A new stream for a window: one JSON value a line. A beat goes out at once, so that the page knows the stream stands, and
   * the states of all jobs follow, so that a page that was reloaded shows what is running.
   * @param gone aborted when the request is
   */
  open(window: string, gone: AbortSignal): Response {
    const { events, jobs, windows } = this.#ports;
    const encoder = new TextEncoder();
    let end = () => {};
    const body = new ReadableStream<Uint8Array>(
      {
        start: (controller) => {
          const send = (event: ServerEvent) => {
            if ((controller.desiredSize ?? 0) < -UNREAD_LIMIT) close();
            else controller.enqueue(encoder.encode(`${JSON.stringify(event)}\n`));
          };
          const unsubscribe = events.subscribe(send);
          windows.seen(window);
          let ended = false;
          end = () => {
            if (ended) return;
            ended = true;
            gone.removeEventListener("abort", end);
            this.#forget(window, close);
            unsubscribe();
            windows.left(window);
          };
          const close = () => {
            if (ended) return;
            end();
            controller.close();
          };
          this.#ends.set(window, (this.#ends.get(window) ?? new Set()).add(close));
          gone.addEventListener("abort", end);
          send({ event: "beat" });
          for (const job of jobs.jobs()) send({ event: "job", job });
          if (gone.aborted) end();
        },
        cancel: () => end(),
      },
      { highWaterMark: 1 },
    );
    return new Response(body, { headers: { ...COMMON_HEADERS, "content-type": "application/jsonl; charset=utf-8" } });
  }

  /** Ends a window's streams: its page is closing. */
  close(window: string): void {
    for (const close of [...(this.#ends.get(window) ?? [])]) close();
  }

  #forget(window: string, close: () => void): void {
    const ends = this.#ends.get(window);
    ends?.delete(close);
    if (ends?.size === 0) this.#ends.delete(window);
  }
}
