import type { TimeLeft } from "#shared/compare/comparison.ts";
import type { EditDistance } from "#shared/compare/edit-distance/edit-distance.ts";

/** Answers of several searches that share the time: every one gets a small share of the time first; what is left goes to those not proven by then. */
export function inTurns(
  count: number,
  timeLeft: TimeLeft,
  solve: (k: number, shouldStop: () => boolean) => EditDistance,
): EditDistance[] {
  const answers: EditDistance[] = [];
  const run = (k: number, share: number) => {
    const until = timeLeft() - share;
    return solve(k, () => timeLeft() <= Math.max(0, until));
  };
  for (let k = 0; k < count; k++) answers.push(run(k, timeLeft() / (4 * Math.max(1, count - k))));
  const open = answers.map((_, k) => k).filter((k) => !answers[k]!.exact);
  open.forEach((k, turn) => {
    if (timeLeft() <= 0) return;
    const again = run(k, timeLeft() / (open.length - turn));
    const before = answers[k]!;
    const better = again.upper < before.upper ? again : before;
    const lower = Math.max(again.lower, before.lower);
    answers[k] = { ...better, lower, exact: better.upper - lower < 1e-9 };
  });
  return answers;
}
