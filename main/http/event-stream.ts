import { COMMON_HEADERS } from "#main/http/headers.ts";
import type { Ports } from "#main/http/ports.ts";
import type { ServerEvent } from "#shared/api/routes.ts";

/** Events a page may leave unread before its stream is ended; it then opens a new one and asks for what it shows anew. */
const UNREAD_LIMIT = 10_000;

/**
 * The window's event stream: one JSON value a line. A beat goes out at once, so that the page knows the stream stands, and
 * the states of all jobs follow, so that a page that was reloaded shows what is running.
 */
export function eventStream(ports: Ports, window: string, gone: AbortSignal): Response {
  const encoder = new TextEncoder();
  let end = () => {};
  const body = new ReadableStream<Uint8Array>(
    {
      start(controller) {
        let ended = false;
        const send = (event: ServerEvent) => {
          if (ended) return;
          if ((controller.desiredSize ?? 0) < -UNREAD_LIMIT) {
            end();
            controller.close();
          } else controller.enqueue(encoder.encode(`${JSON.stringify(event)}\n`));
        };
        const unsubscribe = ports.events.subscribe(send);
        ports.windows.seen(window);
        end = () => {
          if (ended) return;
          ended = true;
          gone.removeEventListener("abort", end);
          unsubscribe();
          ports.windows.left(window);
        };
        gone.addEventListener("abort", end);
        send({ event: "beat" });
        for (const job of ports.jobs.jobs()) send({ event: "job", job });
        if (gone.aborted) end();
      },
      cancel: () => end(),
    },
    { highWaterMark: 1 },
  );
  return new Response(body, { headers: { ...COMMON_HEADERS, "content-type": "application/jsonl; charset=utf-8" } });
}
