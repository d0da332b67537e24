import type { Services } from "#renderer/app/services.ts";
import type { OverlookedSource } from "#renderer/desk/model/overlooked-model.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";

/** The list of overlooked stretches and its search, asked of the server. */
export function overlookedSource(
  { client, notices }: Services,
  { id, polarity }: SpecimenRecord,
  pass: string,
): OverlookedSource {
  return {
    list: () => client.overlooked({ specimen: id, pass, polarity, withDismissed: true }),
    search: (region) => client.startSearch(id, { polarity, ...(region !== null && { region }) }),
    cancel: (job) => client.cancelJob(job),
    onJob: (listener) =>
      client.onEvent((event) => {
        if (event.event === "job") listener(event.job);
      }),
    failed: (error) => notices.failed(error),
  };
}
