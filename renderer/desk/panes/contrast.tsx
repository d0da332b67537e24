import { useEffect, useRef } from "preact/hooks";
import type { SectionSource } from "#renderer/desk/panes/section-sources.ts";

const WIDTH = 130;
const HEIGHT = 26;

/** The grey window over the scan's histogram: two handles to drag or move by keys, and one button for automatic. */
export function Contrast({ model }: { readonly model: SectionSource }) {
  const { section, services } = model;
  useEffect(() => {
    section.loadHistogram().catch((error: unknown) => services.notices.failed(error));
  }, [section, services]);
  const histogram = section.histogram.value;
  const { min, max } = histogram ?? model.specimen.value.volume.range;
  const share = (value: number) => (max > min ? Math.min(1, Math.max(0, (value - min) / (max - min))) : 0);
  const low = share(section.low.value);
  const high = share(section.high.value);
  const step = (max - min) / 200 || 1;
  return (
    <div class="contrast">
      <div class="contrast-plot">
        <svg viewBox={`0 0 ${WIDTH} ${HEIGHT}`} width={WIDTH} height={HEIGHT} aria-hidden="true">
          <rect class="contrast-window" x={low * WIDTH} y="0" width={Math.max(1, (high - low) * WIDTH)} height={HEIGHT} />
          {histogram === null ? null : <path class="contrast-curve" d={curveOf(histogram.counts)} />}
        </svg>
        <Handle
          label="Grey shown as black"
          share={low}
          value={section.low.value}
          step={step}
          min={min}
          max={max}
          set={(value) => section.setWindow(Math.min(value, section.high.value), section.high.value)}
        />
        <Handle
          label="Grey shown as white"
          share={high}
          value={section.high.value}
          step={step}
          min={min}
          max={max}
          set={(value) => section.setWindow(section.low.value, Math.max(value, section.low.value))}
        />
      </div>
      <button type="button" class="button" title="Contrast by the histogram (A)" onClick={() => section.autoContrast()}>
        auto
      </button>
    </div>
  );
}

/** Counts as a filled outline, on a scale that shows rare greys beside common ones. */
function curveOf(counts: readonly number[]): string {
  const most = Math.log1p(Math.max(1, ...counts));
  const points = counts.map((count, i) => {
    const x = (WIDTH * (i + 0.5)) / counts.length;
    return `L${x.toFixed(1)} ${(HEIGHT - (HEIGHT - 2) * (Math.log1p(count) / most)).toFixed(1)}`;
  });
  return `M0 ${HEIGHT}${points.join("")}L${WIDTH} ${HEIGHT}Z`;
}

interface HandleProps {
  readonly label: string;
  readonly share: number;
  readonly value: number;
  readonly min: number;
  readonly max: number;
  readonly step: number;
  readonly set: (value: number) => void;
}

function Handle({ label, share, value, min, max, step, set }: HandleProps) {
  const handle = useRef<HTMLDivElement>(null);
  const drag = (event: PointerEvent) => {
    const box = handle.current!.parentElement!.getBoundingClientRect();
    set(min + Math.min(1, Math.max(0, (event.clientX - box.left) / box.width)) * (max - min));
  };
  const key = (event: KeyboardEvent) => {
    const by = { ArrowLeft: -1, ArrowDown: -1, ArrowRight: 1, ArrowUp: 1, PageDown: -10, PageUp: 10 }[event.key];
    if (by === undefined) return;
    event.preventDefault();
    event.stopPropagation();
    set(Math.min(max, Math.max(min, value + by * step)));
  };
  return (
    <div
      ref={handle}
      class="contrast-handle"
      role="slider"
      tabIndex={0}
      aria-label={label}
      aria-valuemin={min}
      aria-valuemax={max}
      aria-valuenow={Math.round(value * 1000) / 1000}
      style={{ left: `${share * 100}%` }}
      onKeyDown={key}
      onPointerDown={(event) => event.currentTarget.setPointerCapture(event.pointerId)}
      onPointerMove={(event) => {
        if (event.currentTarget.hasPointerCapture(event.pointerId)) drag(event);
      }}
    />
  );
}
