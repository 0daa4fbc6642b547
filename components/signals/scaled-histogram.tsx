import { type ChartColumn, ChartData } from "../ui/chart-data";
import { countText } from "../ui/count";

type Bin = { from: number; to: number; count: number };

const edgeText = (edge: number) => edge.toFixed(1).replace("-", "−");

const COLUMNS: readonly ChartColumn<Bin>[] = [
  { name: "From", field: "from", value: ({ from }) => from, say: ({ from }) => edgeText(from) },
  { name: "To", field: "to", value: ({ to }) => to, say: ({ to }) => edgeText(to) },
  { name: "Payments", field: "payments", value: ({ count }) => count, say: ({ count }) => countText(count) },
];

/** How the scaled values lie between −1 and 1. */
export function ScaledHistogram({ histogram }: { histogram: readonly number[] }) {
  const step = 2 / histogram.length;
  const bins = histogram.map((count, index) => ({
    from: Number((index * step - 1).toFixed(4)),
    to: Number(((index + 1) * step - 1).toFixed(4)),
    count,
  }));
  const most = Math.max(...histogram, 1);
  const atEnds = (histogram[0] ?? 0) + (histogram.at(-1) ?? 0);
  return (
    <figure>
      <svg
        role="img"
        aria-label={`Payments by scaled value from −1 to 1; ${atEnds} lie in the outermost steps`}
        viewBox="0 0 1000 100"
        preserveAspectRatio="none"
        className="h-20 w-full border-b border-edge"
      >
        {bins.map(({ from, count }, index) => {
          // A single payment must still be seen.
          const height = count === 0 ? 0 : Math.max(2, (count / most) * 100);
          const width = 1000 / bins.length;
          return (
            <rect
              key={from}
              x={index * width + 2}
              y={100 - height}
              width={width - 4}
              height={height}
              className="fill-soft"
            />
          );
        })}
      </svg>
      <div aria-hidden="true" className="figures flex justify-between text-small text-soft">
        <span>−1</span>
        <span>0</span>
        <span>+1</span>
      </div>
      <ChartData caption="Payments by scaled value" fileName="signal-preview" columns={COLUMNS} rows={bins} />
    </figure>
  );
}
