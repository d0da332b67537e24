import type { ServerEvent } from "#shared/api/routes.ts";
import { isTautlineError } from "#shared/errors.ts";

/** `up`; `connecting` (first try, or again); `away` (no answer); `restarted` (another run answers: this page's token is void). */
export type ConnectionState = "connecting" | "up" | "away" | "restarted";

export interface StreamPlaces {
  /** Opens the stream; rejects when the server is away or refuses. */
  readonly open: (signal: AbortSignal) => Promise<ReadableStream<Uint8Array>>;
  readonly onEvent: (event: ServerEvent) => void;
  readonly onState: (state: ConnectionState) => void;
  readonly setTimer: (action: () => void, ms: number) => unknown;
  readonly clearTimer: (timer: unknown) => void;
}

/** A stream without a word (the server beats every few seconds) for this long counts as dead. */
export const SILENCE_MS = 20_000;
const FIRST_WAIT_MS = 500;
const LONGEST_WAIT_MS = 8_000;

/** Keeps one event stream open until the returned function is called; connects again after a break, later each time. */
export function keepEventStream(places: StreamPlaces): () => void {
  let stopped = false;
  let waitMs = FIRST_WAIT_MS;
  let retry: unknown = null;
  let abort = new AbortController();

  const again = (state: ConnectionState) => {
    if (stopped) return;
    places.onState(state);
    retry = places.setTimer(() => void run(), waitMs);
    waitMs = Math.min(waitMs * 2, LONGEST_WAIT_MS);
  };

  const run = async () => {
    abort = new AbortController();
    const own = abort;
    let silence: unknown = null;
    const heard = () => {
      if (silence !== null) places.clearTimer(silence);
      silence = places.setTimer(() => own.abort(), SILENCE_MS);
    };
    try {
      const stream = await places.open(own.signal);
      if (stopped) return;
      places.onState("up");
      waitMs = FIRST_WAIT_MS;
      heard();
      await readLines(stream, own.signal, (line) => {
        heard();
        const event = parseEvent(line);
        if (event !== null) places.onEvent(event);
      });
      again("away");
    } catch (error) {
      again(isTautlineError(error, "token-refused") ? "restarted" : "away");
    } finally {
      if (silence !== null) places.clearTimer(silence);
    }
  };

  places.onState("connecting");
  void run();
  return () => {
    stopped = true;
    if (retry !== null) places.clearTimer(retry);
    abort.abort();
  };
}

async function readLines(stream: ReadableStream<Uint8Array>, signal: AbortSignal, onLine: (line: string) => void): Promise<void> {
  const reader = stream.getReader();
  const stop = () => void reader.cancel().catch(() => undefined);
  signal.addEventListener("abort", stop);
  const decoder = new TextDecoder();
  let rest = "";
  try {
    for (;;) {
      const { done, value } = await reader.read();
      if (done) return;
      rest += decoder.decode(value, { stream: true });
      const lines = rest.split("\n");
      rest = lines.pop()!;
      for (const line of lines) if (line.trim() !== "") onLine(line);
    }
  } finally {
    signal.removeEventListener("abort", stop);
  }
}

/** An event, or null for a line that this page does not understand (a newer server may say more). */
function parseEvent(line: string): ServerEvent | null {
  try {
    const value = JSON.parse(line) as { event?: unknown };
    return typeof value === "object" && value !== null && typeof value.event === "string" ? (value as ServerEvent) : null;
  } catch {
    return null;
  }
}
