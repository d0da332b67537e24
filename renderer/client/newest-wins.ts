import { isTautlineError } from "#shared/errors.ts";

/** The answer, or null when a newer request of the same line made it pointless. */
export type Newest<T> = Promise<T | null>;

interface Line {
  /** Number of the newest request. */
  number: number;
  /** Number of the newest request that was answered. */
  answered: number;
  underWay: number;
  /** Starts the one request that waits, or drops it (false). */
  waiting: ((go: boolean) => void) | null;
}

/**
 * Requests by line (one line a purpose, such as "section" or "guide preview"): one under way, one waiting, and a newer one
 * takes the waiting place. So answers keep coming while the pointer moves, and nothing is queued when it stops.
 */
export class NewestWins {
  private readonly lines = new Map<string, Line>();

  /**
   * @param atOnce sends although another is under way (the server drops that one), for when its answer is no longer wanted.
   */
  async run<T>(line: string, send: (number: number) => Promise<T>, atOnce = false): Newest<T> {
    const own = this.lineOf(line);
    own.number += 1;
    const number = own.number;
    release(own, false);
    if (own.underWay > 0 && !atOnce) {
      const go = await new Promise<boolean>((resolve) => {
        own.waiting = resolve;
      });
      if (!go) return null;
    }
    own.underWay += 1;
    try {
      const answer = await send(number);
      if (number < own.answered) return null;
      own.answered = number;
      return answer;
    } catch (error) {
      if (isTautlineError(error, "superseded") || number < own.answered) return null;
      throw error;
    } finally {
      own.underWay -= 1;
      if (own.underWay === 0) release(own, true);
    }
  }

  /** Drops what waits in a line and makes a coming answer of it count as superseded. */
  drop(line: string): void {
    const own = this.lineOf(line);
    own.number += 1;
    own.answered = own.number;
    release(own, false);
  }

  private lineOf(name: string): Line {
    let line = this.lines.get(name);
    if (line === undefined) {
      line = { number: 0, answered: 0, underWay: 0, waiting: null };
      this.lines.set(name, line);
    }
    return line;
  }
}

function release(line: Line, go: boolean): void {
  const waiting = line.waiting;
  line.waiting = null;
  waiting?.(go);
}
