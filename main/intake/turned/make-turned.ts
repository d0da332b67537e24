import type { TurnedOrder } from "#main/intake/intake-messages.ts";
import { type IntakeHooks, makeSpecimen, type SpecimenResult } from "#main/intake/make-specimen.ts";
import { turnedSource } from "#main/intake/turned/turned-source.ts";

/**
 * Makes the turned copy of a specimen as a specimen of its own in the folder `library`: its store, its hash and its record know
 * the code and nothing of the specimen. Facts, landmarks and conversions stay behind; the time is 0.
 * @throws as `makeSpecimen`
 */
export async function makeTurned(order: TurnedOrder, hooks: IntakeHooks = {}): Promise<SpecimenResult> {
  const { volume, code } = order;
  const source = turnedSource({ store: order.store, volume, turn: order.turn, name: code });
  try {
    const options = {
      library: order.library,
      id: order.id,
      name: code,
      created: 0,
      spacing: source.header.headerSpacing!,
      handedness: volume.handedness,
      polarity: order.polarity,
      facts: {},
      synthetic: order.synthetic,
      blurFwhmMm: volume.blurFwhmMm,
    };
    return await makeSpecimen(source, options, hooks);
  } finally {
    await source.close();
  }
}
