/** Wheel travel that counts as one plane for wheels without notches, CSS pixels. */
const SMOOTH_STEP_PX = 30;
/** Travel from which one event counts as notches (a notch is 100 or 120 in most browsers). */
const NOTCH_PX = 80;

/** Gathers wheel events into whole planes: a notch is a plane, a smooth wheel needs some travel for one. */
export class WheelSteps {
  private travel = 0;

  /** Planes to step for this event, positive = away from the viewer (wheel towards the hand). */
  take(deltaPx: number): number {
    if (Math.abs(deltaPx) >= NOTCH_PX) {
      this.travel = 0;
      return Math.sign(deltaPx) * Math.max(1, Math.round(Math.abs(deltaPx) / 110));
    }
    if (Math.sign(deltaPx) !== Math.sign(this.travel)) this.travel = 0;
    this.travel += deltaPx;
    // + 0 takes the sign off a zero.
    const steps = Math.trunc(this.travel / SMOOTH_STEP_PX) + 0;
    this.travel -= steps * SMOOTH_STEP_PX;
    return steps;
  }
}

/** A wheel event's travel in CSS pixels, whatever unit the browser tells it in; sideways travel counts too (shift turns it). */
export function wheelTravelPx(event: Pick<WheelEvent, "deltaX" | "deltaY" | "deltaMode">): number {
  const raw = event.deltaY !== 0 ? event.deltaY : event.deltaX;
  const unit = event.deltaMode === 1 ? 100 / 3 : event.deltaMode === 2 ? 400 : 1;
  return raw * unit;
}
