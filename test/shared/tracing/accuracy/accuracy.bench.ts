// The accuracy table on seeds that nothing was developed or gated on: new ones at every run, printed, so that a run can be repeated.
import { TRIAL_VOLUMES } from "#shared/phantom/trials/trial-volumes.ts";
import { measureVolume, seedsFor, tableLines, type VolumeAccuracy } from "#test/shared/tracing/accuracy/accuracy-table.ts";

/** Prints the table; a seed can be given as TAUTLINE_SEED. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  const first = Number(process.env.TAUTLINE_SEED ?? 10_000 + (Math.floor(Date.now() / 1000) % 1_000_000));
  print(`seeds from ${first}`);
  const all: VolumeAccuracy[] = [];
  for (const volume of TRIAL_VOLUMES) {
    const start = cpuMs();
    const one = measureVolume(volume, seedsFor(volume, first));
    all.push(one);
    print(`${volume.name}: ${((cpuMs() - start) / one.strands.length).toFixed(0)} ms a strand, made and measured`);
  }
  for (const line of tableLines(all)) print(line);
}
