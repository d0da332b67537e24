import { type ReadonlySignal, signal } from "@preact/signals";
import { contentOf, draftOf, type ProtocolDraft } from "#renderer/study/protocol/protocol-draft.ts";
import type { ProtocolContent } from "#shared/study/protocol.ts";

/** Whether what is typed is in the library. */
export type KeptState =
  | { readonly kind: "saved" }
  | { readonly kind: "saving" }
  /** Some of it cannot be understood yet, and is kept in this window alone. */
  | { readonly kind: "problems"; readonly problems: readonly string[] }
  | { readonly kind: "failed"; readonly message: string };

/** Writes when no key came for this long. */
const REST_MS = 700;

/** A protocol that is being typed: it is saved as it goes, as soon as all of it can be understood. */
export class ProtocolEditing {
  private readonly draftSignal;
  private readonly stateSignal = signal<KeptState>({ kind: "saved" });
  private timer: ReturnType<typeof setTimeout> | null = null;
  private dirty = false;
  private running: Promise<boolean> | null = null;

  /** @param save gives why it failed; null when it did not. */
  constructor(
    first: ProtocolContent,
    private readonly save: (content: ProtocolContent) => Promise<string | null>,
  ) {
    this.draftSignal = signal<ProtocolDraft>(draftOf(first));
  }

  get draft(): ReadonlySignal<ProtocolDraft> {
    return this.draftSignal;
  }
  get state(): ReadonlySignal<KeptState> {
    return this.stateSignal;
  }

  change(part: Partial<ProtocolDraft>): void {
    this.draftSignal.value = { ...this.draftSignal.value, ...part };
    this.dirty = true;
    this.stateSignal.value = { kind: "saving" };
    if (this.timer !== null) clearTimeout(this.timer);
    this.timer = setTimeout(() => void this.flush(), REST_MS);
  }

  /** Writes what is not written yet. @returns whether all that is typed is in the library */
  async flush(): Promise<boolean> {
    if (this.timer !== null) clearTimeout(this.timer);
    this.timer = null;
    // One after the other: an older text must not arrive last.
    if (this.running !== null) await this.running;
    if (!this.dirty) return this.stateSignal.value.kind === "saved";
    this.running = this.write();
    try {
      return await this.running;
    } finally {
      this.running = null;
    }
  }

  private async write(): Promise<boolean> {
    const read = contentOf(this.draftSignal.value);
    if ("problems" in read) {
      this.stateSignal.value = { kind: "problems", problems: read.problems };
      return false;
    }
    this.dirty = false;
    const failure = await this.save(read.content);
    if (failure !== null) {
      this.dirty = true;
      this.stateSignal.value = { kind: "failed", message: failure };
      return false;
    }
    // More may have been typed meanwhile.
    if (!this.dirty) this.stateSignal.value = { kind: "saved" };
    return !this.dirty;
  }
}
