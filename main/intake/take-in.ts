import { basename } from "node:path";
import { placeVerdict } from "#main/intake/in-place/in-place-scan.ts";
import { renewPlace } from "#main/intake/in-place/renew-place.ts";
import type { IntakeOrder, IntakeOutcome } from "#main/intake/intake-messages.ts";
import { type IntakeHooks, makeSpecimen } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";
import type { ScanChoice } from "#main/intake/slice-source.ts";
import { diskFiles } from "#main/intake/store/write-files.ts";
import type { InPlaceScan } from "#shared/api/specimen.ts";
import { TautlineError } from "#shared/errors.ts";
import { FITS_IN_PLACE } from "#shared/volume/store/zarr-layout.ts";

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
    const inPlace = order.keep === "in-place" ? await placeOf(order, choice) : null;
    const made = await makeSpecimen(
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
        isPacked: order.keep === "packed",
        ...(inPlace ? { inPlace } : {}),
        ...(order.polarity ? { polarity: order.polarity } : {}),
        facts: order.facts,
        synthetic: false,
      },
      hooks,
    );
    return inPlace ? await renewPlace(order.library, made, hooks.files ?? diskFiles) : made;
  } finally {
    await source.close();
  }
}

/** Where the scan's own store lies. @throws misuse when it cannot be used there */
async function placeOf(order: IntakeOrder, choice: ScanChoice): Promise<InPlaceScan> {
  const isChanged = order.mirror === true || order.region !== undefined;
  const verdict = isChanged ? null : await placeVerdict(order.path, choice);
  if (verdict?.fits) return verdict.scan;
  const why = isChanged
    ? "a part of a scan, a halved or a mirrored one is always copied."
    : (verdict?.why ?? `only an OME-Zarr can be, with ${FITS_IN_PLACE}.`);
  const what = `${basename(order.path)} cannot be used where it lies: ${why}`;
  const next = "Take it in as a copy.";
  throw new TautlineError("misuse", `${what} ${next}`, { what, next });
}
