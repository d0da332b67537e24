import { TautlineError } from "#shared/errors.ts";
import { BRICK_BYTES } from "#shared/volume/bricks.ts";

/** Most workers of one cache: one bit each in a slot's pin word. */
export const MOST_WORKERS = 24;
/** Slots a worker must at least be able to hold at once. */
export const LEAST_HELD = 16;
/** Indices into the slots' voxels are kept below 2^31. */
const MOST_BYTES = 2 ** 31 - 1;

const LOCK = 0;
const HAND = 1;
const HITS = 2;
const LOADS = 3;
const EVICTIONS = 4;
const HEADER = 8;

const FREE = 0;
const LOADING = 1;
const READY = 2;
/** Its loader met an error or died; whoever still pins it lets go and tries again. */
const FAILED = 3;

/** Memory shared by all workers of a cache; created once, sent to each. */
export interface CacheMemory {
  readonly control: SharedArrayBuffer | ArrayBuffer;
  readonly voxels: SharedArrayBuffer | ArrayBuffer;
  readonly slots: number;
  /** Bytes of a slot. */
  readonly slotBytes: number;
  readonly workers: number;
}

/** Counts since the cache was made, and the slots in use or pinned now. */
export interface CacheFigures {
  readonly slots: number;
  readonly used: number;
  readonly pinned: number;
  readonly hits: number;
  readonly loads: number;
  readonly evictions: number;
}

/**
 * The memory of a cache of `bytes` for `workers` threads; plain memory when it is used by one thread alone. Voxels are
 * touched, and so become resident, slot by slot.
 * @param slotBytes of one entry; a brick when not given.
 * @throws misuse when the limit holds too few bricks for the workers.
 */
export function createCacheMemory(bytes: number, workers: number, shared = true, slotBytes: number = BRICK_BYTES): CacheMemory {
  const slots = Math.floor(Math.min(bytes, MOST_BYTES) / slotBytes);
  if (!(workers >= 1 && workers <= MOST_WORKERS) || !(slots >= LEAST_HELD * workers)) {
    const least = LEAST_HELD * workers * slotBytes;
    throw new TautlineError("misuse", `A brick cache for ${workers} workers needs at least ${least} bytes, found ${bytes}.`, {
      what: "cache size",
    });
  }
  const control = 4 * (HEADER + 6 * slots + tableSize(slots));
  const make = (length: number) => (shared ? new SharedArrayBuffer(length) : new ArrayBuffer(length));
  return { control: make(control), voxels: make(slots * slotBytes), slots, slotBytes, workers };
}

/** Slots of the directory: a power of two, at most half full. */
function tableSize(slots: number): number {
  let size = 1;
  while (size < 2 * slots) size *= 2;
  return size;
}

/** Fills one slot with a brick's bytes; may throw. */
export type LoadBrick = (brick: number, into: Uint8Array) => void;

/**
 * One worker's view of the shared brick cache. Slots are found through an open-addressed directory (linear probing); changes of
 * the directory happen under one short lock, reading a held brick needs none. A slot that any worker pins is never evicted;
 * the clock hand takes the first unpinned slot that was not used since it last came by. A brick is loaded by one worker while
 * the others wait for that slot. Each worker loads its own bricks before it waits for another's, so nobody waits in a circle.
 */
export class BrickCache {
  readonly memory: CacheMemory;
  /** Most bricks this worker may hold at once: so many that all workers together never pin every slot. */
  readonly mostHeld: number;
  readonly #bit: number;
  readonly #me: number;
  readonly #words: Int32Array;
  readonly #bytes: Uint8Array;
  readonly #high: Int32Array;
  readonly #low: Int32Array;
  readonly #state: Int32Array;
  readonly #pins: Int32Array;
  readonly #used: Int32Array;
  readonly #loader: Int32Array;
  readonly #table: Int32Array;
  readonly #mask: number;
  readonly #held: Int32Array;
  #heldCount = 0;

  /** @param worker this thread's number, 0 to workers - 1. What a dead thread of that number left behind is cleared. */
  constructor(memory: CacheMemory, worker: number) {
    const { slots } = memory;
    this.memory = memory;
    this.mostHeld = Math.floor(slots / memory.workers);
    this.#me = worker;
    this.#bit = 1 << worker;
    this.#words = new Int32Array(memory.control);
    this.#bytes = new Uint8Array(memory.voxels);
    const part = (n: number) => this.#words.subarray(HEADER + n * slots, HEADER + (n + 1) * slots);
    this.#high = part(0);
    this.#low = part(1);
    this.#state = part(2);
    this.#pins = part(3);
    this.#used = part(4);
    this.#loader = part(5);
    this.#table = this.#words.subarray(HEADER + 6 * slots);
    this.#mask = this.#table.length - 1;
    this.#held = new Int32Array(this.mostHeld);
    this.#recover();
  }

  /**
   * Pins bricks and gives their slots, loading those that are not there.
   * @param space store and level as one number; two stores never share one.
   * @param bricks each at most once; `count` of them, at most `mostHeld` together with what is held already.
   * @param slots filled with `count` slot numbers.
   */
  hold(space: number, bricks: Int32Array, count: number, slots: Int32Array, load: LoadBrick): void {
    if (this.#heldCount + count > this.mostHeld) throw new RangeError(`at most ${this.mostHeld} bricks may be held`);
    const others: number[] = [];
    const mine: number[] = [];
    this.#lock();
    for (let n = 0; n < count; n++) {
      let slot = this.#find(space, bricks[n]!);
      if (slot < 0) {
        slot = this.#take(space, bricks[n]!);
        mine.push(n);
      } else {
        Atomics.or(this.#pins, slot, this.#bit);
        if (Atomics.load(this.#state, slot) === LOADING) others.push(n);
      }
      this.#used[slot] = 1;
      slots[n] = slot;
      this.#held[this.#heldCount++] = slot;
    }
    this.#unlock();
    Atomics.add(this.#words, HITS, count - mine.length);
    Atomics.add(this.#words, LOADS, mine.length);
    this.#load(mine, bricks, slots, load);
    for (const n of others) this.#await(space, n, bricks, slots, load);
  }

  /** Lets go of everything this worker holds. */
  release(): void {
    for (let n = 0; n < this.#heldCount; n++) Atomics.and(this.#pins, this.#held[n]!, ~this.#bit);
    this.#heldCount = 0;
  }

  figures(): CacheFigures {
    let used = 0;
    let pinned = 0;
    for (let slot = 0; slot < this.memory.slots; slot++) {
      if (Atomics.load(this.#state, slot) === READY) used++;
      if (Atomics.load(this.#pins, slot) !== 0) pinned++;
    }
    const word = (at: number) => Atomics.load(this.#words, at);
    return { slots: this.memory.slots, used, pinned, hits: word(HITS), loads: word(LOADS), evictions: word(EVICTIONS) };
  }

  #load(mine: readonly number[], bricks: Int32Array, slots: Int32Array, load: LoadBrick): void {
    let done = 0;
    try {
      for (; done < mine.length; done++) {
        const slot = slots[mine[done]!]!;
        const { slotBytes } = this.memory;
        load(bricks[mine[done]!]!, this.#bytes.subarray(slot * slotBytes, (slot + 1) * slotBytes));
        Atomics.store(this.#state, slot, READY);
        Atomics.notify(this.#state, slot);
      }
    } catch (error) {
      this.#lock();
      for (const n of mine.slice(done)) this.#fail(slots[n]!);
      this.#unlock();
      this.release();
      throw error;
    }
  }

  /** Waits until another worker has loaded a brick; loads it here when that worker failed or died. */
  #await(space: number, n: number, bricks: Int32Array, slots: Int32Array, load: LoadBrick): void {
    for (;;) {
      const slot = slots[n]!;
      // The loader notifies; the time limit only guards against a notice lost with a dying thread.
      while (Atomics.load(this.#state, slot) === LOADING) Atomics.wait(this.#state, slot, LOADING, 200);
      if (Atomics.load(this.#state, slot) === READY) return;
      const place = this.#held.subarray(0, this.#heldCount).lastIndexOf(slot);
      this.#lock();
      Atomics.and(this.#pins, slot, ~this.#bit);
      let next = this.#find(space, bricks[n]!);
      const own = next < 0;
      if (own) next = this.#take(space, bricks[n]!);
      else Atomics.or(this.#pins, next, this.#bit);
      this.#used[next] = 1;
      this.#unlock();
      slots[n] = next;
      this.#held[place] = next;
      if (own) {
        Atomics.add(this.#words, LOADS, 1);
        this.#load([n], bricks, slots, load);
      }
    }
  }

  #lock(): void {
    for (;;) {
      const owner = Atomics.compareExchange(this.#words, LOCK, 0, this.#me + 1);
      if (owner === 0) return;
      Atomics.wait(this.#words, LOCK, owner, 50);
    }
  }

  #unlock(): void {
    Atomics.store(this.#words, LOCK, 0);
    Atomics.notify(this.#words, LOCK, 1);
  }

  /** Slot of a brick, or -1. Under the lock. */
  #find(space: number, brick: number): number {
    for (let at = hash(space, brick) & this.#mask; ; at = (at + 1) & this.#mask) {
      const slot = this.#table[at]! - 1;
      if (slot < 0) return -1;
      if (this.#low[slot] === brick && this.#high[slot] === space) return slot;
    }
  }

  /** A slot for a brick that has none, pinned by this worker and marked as loading. Under the lock. */
  #take(space: number, brick: number): number {
    const { slots } = this.memory;
    let hand = this.#words[HAND]!;
    // Twice round: the first round may only clear marks of use.
    for (let step = 0; step < 2 * slots; step++) {
      const slot = hand;
      hand = hand + 1 === slots ? 0 : hand + 1;
      if (Atomics.load(this.#pins, slot) !== 0) continue;
      if (this.#used[slot] === 1) {
        this.#used[slot] = 0;
        continue;
      }
      this.#words[HAND] = hand;
      if (this.#state[slot] === READY) {
        Atomics.add(this.#words, EVICTIONS, 1);
        this.#removeFromTable(slot);
      }
      // In this order, so that a thread that dies in between leaves a free slot or a whole one.
      Atomics.store(this.#state, slot, FREE);
      this.#high[slot] = space;
      this.#low[slot] = brick;
      this.#loader[slot] = this.#me;
      Atomics.or(this.#pins, slot, this.#bit);
      Atomics.store(this.#state, slot, LOADING);
      this.#insertIntoTable(slot);
      return slot;
    }
    throw new TautlineError("internal", `All ${slots} slots of the brick cache are pinned.`, {
      what: "brick cache full of pins",
    });
  }

  /** Under the lock. */
  #fail(slot: number): void {
    this.#removeFromTable(slot);
    Atomics.store(this.#state, slot, FAILED);
    this.#used[slot] = 0;
    Atomics.notify(this.#state, slot);
  }

  #insertIntoTable(slot: number): void {
    let at = hash(this.#high[slot]!, this.#low[slot]!) & this.#mask;
    while (this.#table[at] !== 0) at = (at + 1) & this.#mask;
    this.#table[at] = slot + 1;
  }

  /** Backward-shift deletion, so that no grave stays behind. */
  #removeFromTable(slot: number): void {
    const mask = this.#mask;
    let hole = hash(this.#high[slot]!, this.#low[slot]!) & mask;
    while (this.#table[hole] !== slot + 1) hole = (hole + 1) & mask;
    for (let at = (hole + 1) & mask; this.#table[at] !== 0; at = (at + 1) & mask) {
      const other = this.#table[at]! - 1;
      const home = hash(this.#high[other]!, this.#low[other]!) & mask;
      if (((at - home) & mask) >= ((at - hole) & mask)) {
        this.#table[hole] = other + 1;
        hole = at;
      }
    }
    this.#table[hole] = 0;
  }

  /** Clears what a dead thread of this number left: its lock, its pins, its unfinished loads; the directory is made anew. */
  #recover(): void {
    if (Atomics.load(this.#words, LOCK) !== this.#me + 1) this.#lock();
    this.#table.fill(0);
    for (let slot = 0; slot < this.memory.slots; slot++) {
      Atomics.and(this.#pins, slot, ~this.#bit);
      const state = Atomics.load(this.#state, slot);
      if (state === LOADING && this.#loader[slot] === this.#me) {
        Atomics.store(this.#state, slot, FAILED);
        this.#used[slot] = 0;
        Atomics.notify(this.#state, slot);
      } else if (state === LOADING || state === READY) this.#insertIntoTable(slot);
    }
    this.#unlock();
  }
}

/** Mixes a brick's key; neighbours fall far apart. @source the finaliser of MurmurHash3 (Appleby), public domain. */
function hash(space: number, brick: number): number {
  let h = Math.imul(space, 0x9e3779b1) ^ brick;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
}
