/** How many requests a window has under way at most; browsers open six connections an origin and one is the event stream. */
export const REQUESTS_AT_ONCE = 4;

interface Waiting {
  readonly rank: number;
  readonly start: () => void;
}

/** Lets at most `limit` pieces of work run at once; among those that wait, the lowest rank first, then the oldest. */
export class RequestGate {
  private running = 0;
  private readonly waiting: Waiting[] = [];

  constructor(private readonly limit: number = REQUESTS_AT_ONCE) {}

  async pass<T>(rank: number, work: () => Promise<T>): Promise<T> {
    if (this.running >= this.limit) await new Promise<void>((start) => this.waiting.push({ rank, start }));
    else this.running += 1;
    try {
      return await work();
    } finally {
      this.next();
    }
  }

  /** Hands the place of finished work on to the next in line, so that `running` never exceeds the limit in between. */
  private next(): void {
    let best = -1;
    for (let i = 0; i < this.waiting.length; i++) {
      if (best < 0 || this.waiting[i]!.rank < this.waiting[best]!.rank) best = i;
    }
    if (best < 0) this.running -= 1;
    else this.waiting.splice(best, 1)[0]!.start();
  }
}
