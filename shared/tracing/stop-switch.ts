import { TautlineError } from "#shared/errors.ts";

/** Something that tells long work to stop; an AbortSignal is one. */
export interface StopSignal {
  readonly aborted: boolean;
}

/** Where long work looks whether it is still wanted. Whoever asks for work puts its signal in for as long; null = it goes to its end. */
export interface StopSwitch {
  signal: StopSignal | null;
}

/** Nothing, while the work is wanted. @throws TautlineError `cancelled` when it is to stop. */
export function checkStop({ signal }: StopSwitch): void {
  if (signal !== null) stopIfTracingStopped(signal);
}

/** Nothing, until the signal says so. @throws TautlineError `cancelled` then. */
export function stopIfTracingStopped(signal: StopSignal): void {
  if (signal.aborted) throw new TautlineError("cancelled", "Tracing was stopped.", { what: "trace" });
}

/** What `work` gives; all that looks at the switch meanwhile obeys the signal. @throws whatever it throws, and `cancelled`. */
export function stoppable<T>(stop: StopSwitch, signal: StopSignal, work: () => T): T {
  const before = stop.signal;
  stop.signal = signal;
  try {
    return work();
  } finally {
    stop.signal = before;
  }
}
