import type { CompareMessage, CompareOrder } from "#renderer/study/side-by-side/compare-messages.ts";
import { compareSets, distancesAtMerges } from "#shared/compare/compare-sets.ts";
import { matchSets } from "#shared/compare/matched-sets.ts";

// A thread of the page: the search for a proof may take its whole time, and the page must answer meanwhile.

const say = (message: CompareMessage) => postMessage(message);

addEventListener("message", ({ data }: MessageEvent<CompareOrder>) => {
  const began = performance.now();
  const timeLeft = () => data.budgetMs - (performance.now() - began);
  try {
    if (data.what === "compare") {
      const tell = (progress: Extract<CompareMessage, { kind: "progress" }>["progress"]) => say({ kind: "progress", progress });
      say({ kind: "compared", comparison: compareSets(data.a, data.b, data.options, timeLeft, tell) });
    } else {
      const found = distancesAtMerges(matchSets(data.a, data.b), data.options, data.merges, timeLeft);
      say({ kind: "merges", merges: found.map(({ merge, whole }) => ({ merge, whole })) });
    }
  } catch (error) {
    say({ kind: "failed", message: error instanceof Error ? error.message : String(error) });
  }
});
