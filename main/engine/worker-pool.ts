import { Worker } from "node:worker_threads";
import type { Calls } from "#main/engine/calls.ts";
import type { EngineTasks, FromWorker, StoreRef, TaskKind, ToWorker, WorkerStart } from "#main/engine/tasks.ts";
import { decodeError, TautlineError } from "#shared/errors.ts";

/** How a task is queued. */
export interface TaskOrder {
  /** Workers that may run it, the preferred one first. */
  readonly workers: readonly number[];
  /** Tasks of one line supersede each other by number; absent: never superseded. */
  readonly line?: string;
  readonly lane?: string;
  readonly number?: number;
  /** Goes before what is queued already: tiny tasks whose answer the pointer waits for. */
  readonly urgent?: boolean;
  /** Work that nobody waits for: where another task needs its worker it is broken off, and begun again afterwards. */
  readonly background?: boolean;
}

interface Task {
  readonly id: number;
  readonly kind: TaskKind;
  readonly message: ToWorker;
  readonly order: TaskOrder;
  readonly resolve: (answer: never) => void;
  readonly reject: (error: unknown) => void;
  /** Answered already (superseded); only its worker is still busy with it. */
  settled: boolean;
  /** Told to stop so that another task gets its worker. */
  givesWay: boolean;
}

interface Seat {
  thread: Worker;
  running: Task | null;
  /** Deaths in a row without a finished task. */
  deaths: number;
  broken: boolean;
}

/** A worker that dies so often without finishing anything is left alone for a while; its tasks fail meanwhile. */
const MOST_DEATHS = 3;
const REST_MS = 5000;
/** Garbage of short life that a thread's heap may gather, MB; the default lets every thread hold several times as much. */
const YOUNG_MB = 12;

/**
 * Runs tasks on worker threads, one at a time each; everything that waits is queued here, so that dropping it costs nothing.
 * Within a line a newer task drops older ones at once with `superseded`; one that runs is told to stop and its worker becomes
 * free when it does. A dead worker is started again and its running task fails.
 */
export class WorkerPool {
  readonly #url: URL;
  readonly #start: (worker: number) => WorkerStart;
  readonly #calls: Calls;
  readonly #seats: Seat[] = [];
  readonly #waiting: Task[] = [];
  #closed = false;
  #ids = 0;

  constructor(url: URL, workers: number, calls: Calls, start: (worker: number) => WorkerStart) {
    this.#url = url;
    this.#start = start;
    this.#calls = calls;
    for (let n = 0; n < workers; n++) {
      this.#seats.push({ thread: this.#spawn(n), running: null, deaths: 0, broken: false });
    }
  }

  /** Tasks queued and tasks running (superseded ones that have not stopped yet included). */
  get load(): { waiting: number; running: number } {
    return { waiting: this.#waiting.length, running: this.#seats.filter((seat) => seat.running !== null).length };
  }

  /** @throws superseded, internal, and whatever the task throws. */
  run<K extends TaskKind>(
    kind: K,
    store: StoreRef | null,
    input: EngineTasks[K]["input"],
    order: TaskOrder,
  ): Promise<EngineTasks[K]["answer"]> {
    return new Promise((resolve, reject) => {
      if (this.#closed) return reject(closedError());
      const id = this.#nextId();
      const task: Task = {
        id,
        kind,
        message: { type: "run", id, kind, store, input },
        order,
        resolve,
        reject,
        settled: false,
        givesWay: false,
      };
      if (order.line !== undefined && this.#supersede(task)) return;
      if (order.urgent) this.#waiting.unshift(task);
      else this.#waiting.push(task);
      this.#dispatch();
    });
  }

  /** Sends a message that has no answer to all workers, or to one. */
  tell(message: ToWorker, worker?: number): void {
    if (this.#closed) return;
    this.#seats.forEach((seat, n) => {
      if (worker === undefined || worker === n) seat.thread.postMessage(message);
    });
  }

  /** The worker ends at once, whatever it is doing, and is started again. For tests of that. */
  async kill(worker: number): Promise<void> {
    await this.#seats[worker]!.thread.terminate();
  }

  async close(): Promise<void> {
    this.#closed = true;
    for (const task of this.#waiting.splice(0)) settle(task, closedError());
    for (const seat of this.#seats) if (seat.running) settle(seat.running, closedError());
    await Promise.all(this.#seats.map((seat) => seat.thread.terminate()));
  }

  #nextId(): number {
    // No task is 0: that is what a worker's word says before any task was to stop.
    this.#ids = this.#ids >= 0x7fff_fffe ? 1 : this.#ids + 1;
    return this.#ids;
  }

  /** Drops older tasks of the line; true when `task` itself is older than one that is under way. */
  #supersede(task: Task): boolean {
    const { line, number = 0 } = task.order;
    const others = [...this.#waiting, ...this.#seats.flatMap((seat) => seat.running ?? [])].filter(
      (other) => other.order.line === line && !other.settled,
    );
    if (others.some((other) => (other.order.number ?? 0) > number)) {
      settle(task, supersededError(task));
      return true;
    }
    for (const other of others) if ((other.order.number ?? 0) < number) this.#drop(other);
    return false;
  }

  #drop(task: Task): void {
    const queued = this.#waiting.indexOf(task);
    if (queued >= 0) this.#waiting.splice(queued, 1);
    else {
      const worker = this.#seats.findIndex((seat) => seat.running === task);
      this.#calls.stop(worker, task.id);
    }
    settle(task, supersededError(task));
  }

  #dispatch(): void {
    for (let n = 0; n < this.#waiting.length; ) {
      const task = this.#waiting[n]!;
      const { workers } = task.order;
      const able = workers.filter((worker) => !this.#seats[worker]!.broken);
      const free = able.find((worker) => this.#seats[worker]!.running === null);
      if (able.length > 0 && free === undefined) {
        if (!task.order.background) this.#makeRoom(able);
        n++;
        continue;
      }
      this.#waiting.splice(n, 1);
      if (free === undefined) {
        settle(task, fault("A part of the engine could not be started.", "engine worker does not start"));
        continue;
      }
      const seat = this.#seats[free]!;
      seat.running = task;
      this.#calls.come(free);
      seat.thread.postMessage(task.message);
    }
  }

  /** Breaks off background work on one of the workers, unless one is giving way already. */
  #makeRoom(able: readonly number[]): void {
    const seats = able.map((worker) => ({ worker, running: this.#seats[worker]!.running }));
    if (seats.some(({ running }) => running?.givesWay)) return;
    const background = seats.find(({ running }) => running?.order.background && !running.settled);
    if (!background) return;
    background.running!.givesWay = true;
    this.#calls.stop(background.worker, background.running!.id);
  }

  /** A task that gave way waits again, behind what is waiting, under a new number: the old one is to stop. */
  #again(task: Task): void {
    const { message, order, resolve, reject, kind } = task;
    if (message.type !== "run") return;
    const id = this.#nextId();
    this.#waiting.push({ id, kind, message: { ...message, id }, order, resolve, reject, settled: false, givesWay: false });
  }

  #spawn(n: number): Worker {
    this.#calls.reset(n);
    const thread = new Worker(this.#url, {
      workerData: this.#start(n),
      name: `engine-${n}`,
      resourceLimits: { maxYoungGenerationSizeMb: YOUNG_MB },
    });
    thread.on("message", (message: FromWorker) => this.#receive(n, message));
    let reason = "it ended";
    thread.on("error", (error) => {
      reason = error.message;
    });
    thread.on("exit", () => this.#died(n, reason));
    return thread;
  }

  #receive(n: number, message: FromWorker): void {
    const seat = this.#seats[n];
    if (!seat || message.type === "ready") return;
    const task = seat.running;
    if (task === null || task.id !== message.id) return;
    seat.running = null;
    seat.deaths = 0;
    if (task.givesWay && !task.settled && message.type === "failed" && message.error.tag === "cancelled") this.#again(task);
    else if (!task.settled) {
      task.settled = true;
      if (message.type === "done") task.resolve(message.answer as never);
      else task.reject(decodeError(message.error));
    }
    this.#dispatch();
  }

  #died(n: number, reason: string): void {
    if (this.#closed) return;
    const seat = this.#seats[n]!;
    const task = seat.running;
    seat.running = null;
    if (task)
      settle(task, fault("A part of the engine failed and was started again; try once more.", `engine worker: ${reason}`));
    seat.deaths++;
    if (seat.deaths > MOST_DEATHS) {
      seat.broken = true;
      setTimeout(() => this.#tryAgain(n), REST_MS).unref();
    } else seat.thread = this.#spawn(n);
    this.#dispatch();
  }

  #tryAgain(n: number): void {
    if (this.#closed) return;
    const seat = this.#seats[n]!;
    seat.thread = this.#spawn(n);
    seat.broken = false;
    seat.deaths = MOST_DEATHS;
    this.#dispatch();
  }
}

function settle(task: Task, error: unknown): void {
  if (task.settled) return;
  task.settled = true;
  task.reject(error);
}

function supersededError(task: Task): TautlineError<"superseded"> {
  const { lane = "", number = 0 } = task.order;
  return new TautlineError("superseded", `A newer request of the lane ${lane} took the place of number ${number}.`, {
    lane,
    number,
  });
}

function closedError(): TautlineError<"cancelled"> {
  return new TautlineError("cancelled", "The engine was closed.", { what: "engine" });
}

function fault(message: string, what: string): TautlineError<"internal"> {
  return new TautlineError("internal", message, { what });
}
