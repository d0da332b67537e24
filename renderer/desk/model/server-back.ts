import type { Client } from "#renderer/client/client.ts";

/** Even while the event stream says "up", a request that failed is not repeated sooner than this. */
const PAUSE_MS = 1_000;

/** Resolves when the server answers again. */
export async function serverBack(client: Client): Promise<void> {
  await new Promise((resolve) => setTimeout(resolve, PAUSE_MS));
  await new Promise<void>((resolve) => {
    let stop: (() => void) | null = null;
    let done = false;
    stop = client.onConnection((state) => {
      if (state !== "up" || done) return;
      done = true;
      stop?.();
      resolve();
    });
    if (done) stop();
  });
}
