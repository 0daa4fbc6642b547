import type { CurvePoint, ScorerFigures } from "@/lib/learning/learning-schema";
import type { ChartColumn } from "../ui/chart-data";
import { natsText } from "./figure-text";

/** What the curve is drawn from, a column for each line. */
export function columnsFor(
  scorers: readonly ScorerFigures[],
  curve: readonly CurvePoint[],
): ChartColumn<CurvePoint>[] {
  const columns: ChartColumn<CurvePoint>[] = [
    { name: "Label", field: "label_log_row", value: ({ seq }) => seq },
    {
      name: "Came, UTC",
      field: "at",
      value: ({ at }) => at,
      say: ({ at }) => at.slice(0, 16).replace("T", " "),
    },
    ...scorers.map(({ id, name }) => ({
      name,
      field: name,
      value: ({ losses }: CurvePoint) => losses[id] ?? null,
      say: ({ losses }: CurvePoint) => sayLoss(losses[id]),
    })),
  ];
  if (curve.some(({ hindsight }) => hindsight !== null)) {
    columns.push({
      name: "Best fixed weights",
      field: "best_fixed_weights",
      value: ({ hindsight }) => hindsight,
      say: ({ hindsight }) => sayLoss(hindsight),
    });
  }
  return columns;
}

const sayLoss = (loss: number | null | undefined) =>
  loss === null || loss === undefined ? "–" : natsText(loss, 2);
