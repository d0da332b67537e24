/** What was opened, to be closed in reverse order, once. */
export class Disposers {
  readonly #list: (() => unknown)[] = [];

  get empty(): boolean {
    return this.#list.length === 0;
  }

  add(dispose: () => unknown): void {
    this.#list.push(dispose);
  }

  /** Closes everything; a failure is reported and the rest is closed all the same. */
  async dispose(onFault: (error: unknown) => void): Promise<void> {
    for (let last = this.#list.pop(); last; last = this.#list.pop()) {
      try {
        await last();
      } catch (error) {
        onFault(error);
      }
    }
  }
}
