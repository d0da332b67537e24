import type { IntakeOrder, IntakeOutcome } from "#main/intake/intake-messages.ts";
import { type IntakeHooks, makeSpecimen } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";

/** Takes a scan in, in this thread. See {@link makeSpecimen}. */
export async function takeIn(order: IntakeOrder, hooks: IntakeHooks = {}): Promise<IntakeOutcome> {
  const { channel, time, raw } = order;
  const choice = {
    ...(channel === undefined ? {} : { channel }),
    ...(time === undefined ? {} : { time }),
    ...(raw ? { raw } : {}),
  };
  const source = await openScan(order.path, choice);
  try {
    return await makeSpecimen(
      source,
      {
        library: order.library,
        id: order.id,
        name: order.name,
        created: order.created,
        spacing: order.spacing,
        handedness: order.handedness,
        mirror: order.mirror ?? false,
        ...(order.region ? { region: order.region } : {}),
        ...(order.polarity ? { polarity: order.polarity } : {}),
        facts: order.facts,
        synthetic: false,
      },
      hooks,
    );
  } finally {
    await source.close();
  }
}
