/**
 * Words in shared memory through which the pool reaches a worker that is computing and so reads no messages: which task it
 * is to stop, and how many tasks were sent to it, so that work done in idle time makes room at once.
 */
export class Calls {
  readonly memory: SharedArrayBuffer;
  readonly #words: Int32Array;

  constructor(memory: SharedArrayBuffer) {
    this.memory = memory;
    this.#words = new Int32Array(memory);
  }

  static forWorkers(workers: number): Calls {
    return new Calls(new SharedArrayBuffer(8 * workers));
  }

  /** The pool: a thread begins anew under this number. */
  reset(worker: number): void {
    this.#words.fill(0, 2 * worker, 2 * worker + 2);
  }

  /** The pool: the worker's task of this id is no longer wanted. */
  stop(worker: number, task: number): void {
    Atomics.store(this.#words, 2 * worker, task);
  }

  /** The pool: a task is on its way. */
  come(worker: number): void {
    Atomics.add(this.#words, 2 * worker + 1, 1);
  }

  /** The worker: a signal that tells when a task is to stop. */
  signalOf(worker: number, task: number): { readonly aborted: boolean } {
    const words = this.#words;
    return {
      get aborted() {
        return Atomics.load(words, 2 * worker) === task;
      },
    };
  }

  /** The worker: a signal that tells when more tasks were sent than the `received` ones. */
  signalBeyond(worker: number, received: number): { readonly aborted: boolean } {
    const words = this.#words;
    return {
      get aborted() {
        return Atomics.load(words, 2 * worker + 1) !== received;
      },
    };
  }
}
