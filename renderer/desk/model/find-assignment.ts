import type { Services } from "#renderer/app/services.ts";
import type { AssignmentView } from "#shared/api/study.ts";

/** The assignment of a study that a specimen carries; null for most, which carry none, and when it cannot be told (it is said). */
export async function findAssignment({ client, notices }: Services, specimen: string): Promise<AssignmentView | null> {
  try {
    const { assignments } = await client.studies.all();
    return assignments.some((one) => one.specimen === specimen) ? await client.studies.assignment(specimen) : null;
  } catch (error) {
    notices.failed(error);
    return null;
  }
}
