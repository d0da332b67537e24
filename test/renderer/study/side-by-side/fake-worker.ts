import type { CompareMessage, CompareOrder } from "#renderer/study/side-by-side/compare-messages.ts";
import type { CompareWorker } from "#renderer/study/side-by-side/compare-run.ts";

/** A worker that answers when the test says so. */
export class FakeWorker implements CompareWorker {
  onmessage: CompareWorker["onmessage"] = null;
  onerror: CompareWorker["onerror"] = null;
  readonly orders: CompareOrder[] = [];
  ended = false;

  postMessage(order: CompareOrder): void {
    this.orders.push(order);
  }
  terminate(): void {
    this.ended = true;
  }
  say(message: CompareMessage): void {
    this.onmessage?.({ data: message });
  }
}
