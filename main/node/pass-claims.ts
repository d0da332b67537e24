/** Which window may write to which pass; the first to ask has it until it releases it or is gone. */
export class PassClaims {
  readonly #writers = new Map<string, string>();

  /** True when `window` is the writer of the pass from now on. */
  claim(specimen: string, pass: string, window: string): boolean {
    const key = `${specimen}/${pass}`;
    const writer = this.#writers.get(key);
    if (writer !== undefined && writer !== window) return false;
    this.#writers.set(key, window);
    return true;
  }

  release(specimen: string, pass: string, window: string): void {
    const key = `${specimen}/${pass}`;
    if (this.#writers.get(key) === window) this.#writers.delete(key);
  }

  /** Gives back everything a window holds; it is gone. */
  releaseAll(window: string): void {
    for (const [key, writer] of this.#writers) if (writer === window) this.#writers.delete(key);
  }
}
