/** What a robot did. Moving the pointer costs nothing, as it does not count for a person either. */
export interface Effort {
  clicks: number;
  keys: number;
  wheelSteps: number;
}

/** A pointer comes to rest so many pixels (standard deviation each way) beside what is aimed at: own estimate of a careful hand. */
export const SHAKE_PX = 1.5;

/** Clicks and keys; wheel steps are given apart. */
export function interactions({ clicks, keys }: Effort): number {
  return clicks + keys;
}
