import type { EventsPort } from "#main/http/ports.ts";
import type { ServerEvent } from "#shared/api/routes.ts";

const BEAT_EVERY_MS = 5_000;

/** Hands every event to all windows' streams, and a beat every few seconds so that a dead stream is noticed. */
export class Events implements EventsPort {
  readonly #listeners = new Set<(event: ServerEvent) => void>();
  #timer: NodeJS.Timeout | null = null;

  subscribe(listener: (event: ServerEvent) => void): () => void {
    this.#listeners.add(listener);
    this.#timer ??= setInterval(() => this.emit({ event: "beat" }), BEAT_EVERY_MS).unref();
    return () => {
      this.#listeners.delete(listener);
      if (this.#listeners.size > 0 || !this.#timer) return;
      clearInterval(this.#timer);
      this.#timer = null;
    };
  }

  emit(event: ServerEvent): void {
    for (const listener of [...this.#listeners]) listener(event);
  }
}
