import { computed, type ReadonlySignal, type Signal, signal } from "@preact/signals";
import { type ForkProposal, forkProposal } from "#renderer/editor/tracing/guide-advice.ts";
import type { Guide } from "#renderer/editor/tracing/guide-follower.ts";
import { closedAround, detourPins, tracedStrings } from "#renderer/editor/tracing/traced-strings.ts";
import type { UnderWay } from "#renderer/editor/tracing/under-way.ts";
import { type GuideWarning, guideWarnings, type TracedString } from "#shared/checks/guide-warnings.ts";
import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import type { ImpassableString } from "#shared/tracing/guide/impassable.ts";
import { strandsAt } from "#shared/trees/adjacency.ts";
import type { TreeDocument } from "#shared/trees/document.ts";
import { isLooseEnd } from "#shared/trees/edits/rewiring.ts";

/** What the guide has to do with the strings that are traced already: what it says of them, and whether it may enter them. */
export class StringsBeside {
  /** The guide may not enter strings that are traced already. */
  readonly isClosed: Signal<boolean> = signal(false);
  /** What a person should look at along the guide, in its order. */
  readonly advice: ReadonlySignal<readonly GuideWarning[]>;
  /** The fork that the guide suggests. */
  readonly fork: ReadonlySignal<ForkProposal | null>;

  constructor(
    private readonly document: ReadonlySignal<TreeDocument>,
    private readonly underWay: ReadonlySignal<UnderWay>,
    guide: ReadonlySignal<Guide | null>,
  ) {
    this.advice = computed(() => {
      const shown = guide.value;
      return shown === null ? [] : guideWarnings(shown.points, shown.doubtful, this.strings(document.value, underWay.value));
    });
    this.fork = computed(() => forkProposal(document.value, underWay.value, this.advice.value));
  }

  /** The strings that a guide from this pin may not enter. */
  closedFor(pin: PointMm): ImpassableString[] {
    return this.isClosed.peek() ? closedAround(this.strings(this.document.peek(), this.underWay.peek()), pin) : [];
  }

  /** Pins that keep the committed curve on the guide's way around closed strings; none while they are open. */
  detour(guide: Guide | null, to: Vec3): PointMm[] {
    return this.isClosed.peek() ? detourPins(guide, to, this.strings(this.document.peek(), this.underWay.peek())) : [];
  }

  /** The strings traced before, without the strand under way. */
  private strings(document: TreeDocument, underWay: UnderWay): TracedString[] {
    const tip = underWay.kind === "strand" ? document.nodes.get(underWay.tip) : undefined;
    const own = tip !== undefined && isLooseEnd(document, tip) ? strandsAt(document, tip.id)[0] : undefined;
    return tracedStrings(document, own?.id ?? null);
  }
}
