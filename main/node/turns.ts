/** Work that must not overlap takes turns, in the order it was asked for; a failure ends only its own turn. */
export class Turns {
  #last: Promise<unknown> = Promise.resolve();

  /** The result of `work`, which begins when all work asked for before has ended. */
  take<T>(work: () => Promise<T>): Promise<T> {
    const turn = this.#last.then(work, work);
    this.#last = turn.catch(() => undefined);
    return turn;
  }
}
