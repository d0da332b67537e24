export type Lane = "section" | "guide" | "space" | "job";

/**
 * Every heavy request says whose it is. A newer number of the same window, lane and kind of request (section, strip, snap,
 * preview ...) supersedes an older one that is not answered yet; kinds do not drop each other, so each may be counted by
 * itself. In the lane `job` nothing is superseded.
 */
export interface Ticket {
  readonly window: string;
  readonly lane: Lane;
  readonly number: number;
}
