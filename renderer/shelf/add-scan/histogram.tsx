export interface HistogramProps {
  readonly min: number;
  readonly max: number;
  readonly counts: readonly number[];
}

const WIDTH = 240;
const HEIGHT = 56;

/** Grey values of the scan, on a logarithmic scale of counts: strings are few beside background. */
export function Histogram({ min, max, counts }: HistogramProps) {
  const most = Math.log1p(Math.max(1, ...counts));
  const step = WIDTH / Math.max(1, counts.length);
  const bars = counts.map((count, i) => {
    const height = (HEIGHT * Math.log1p(count)) / most;
    return `M ${(i * step).toFixed(2)} ${HEIGHT} v ${(-height).toFixed(2)} h ${step.toFixed(2)} v ${height.toFixed(2)} Z`;
  });
  return (
    <figure class="scan-histogram">
      <svg
        viewBox={`0 0 ${WIDTH} ${HEIGHT}`}
        preserveAspectRatio="none"
        role="img"
        aria-label={`Histogram of grey values, ${min} to ${max}`}
      >
        <path d={bars.join(" ")} />
      </svg>
      <figcaption class="soft figures">
        <span>{short(min)}</span>
        <span>grey values</span>
        <span>{short(max)}</span>
      </figcaption>
    </figure>
  );
}

function short(value: number): string {
  return String(Number(value.toPrecision(5)));
}
