import { logitOf } from "@/lib/decibans";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { createScorer } from "@/lib/scorer";
import { DIMENSION } from "@/lib/signals/catalogue";
import type { Row } from "../support/bench";
import { judgeWeek } from "./support/judge-week";
import { FIRST_CHARGEBACK_DAY, liveStream, type Maturing, TEST_FROM_DAY } from "./support/live-stream";
import { readStream } from "./support/stream-payments";
import { StreamVectors } from "./support/stream-vectors";

/** The stream lasts six weeks and its chargebacks come after seven days: these stand for the months of real ones. */
const PLANS: { name: string; matured?: Maturing }[] = [
  { name: "ignored" },
  ...([7, 14] as const).flatMap((afterDays) =>
    ([1, 0.2] as const).map((weight) => ({
      name: `after ${afterDays} days, as many as decisions, weight ${weight}`,
      matured: { afterDays, perDay: "as decisions" as const, weight },
    })),
  ),
  { name: "after 7 days, all, weight 0.2", matured: { afterDays: 7, perDay: "all", weight: 0.2 } },
];

export const needs = ["CUPEL_STREAM", "CUPEL_STREAM_FRAUD"];

/** Whether passed payments that nobody labelled help when they count as legitimate later, on the outside stream. */
export async function run(): Promise<Row[]> {
  const { CUPEL_STREAM = "", CUPEL_STREAM_FRAUD = "" } = process.env;
  const stream = new StreamVectors(await readStream(CUPEL_STREAM, CUPEL_STREAM_FRAUD));
  const rows: Row[] = [];
  for (const chargebacksFromDay of [FIRST_CHARGEBACK_DAY, null]) {
    for (const { name, matured } of PLANS) {
      const scorer = createScorer({ dimension: DIMENSION, offset: logitOf(DEFAULT_TERMS.baseRate) });
      const lived = liveStream(stream, scorer, { chargebacksFromDay, ...(matured && { matured }) });
      const { auc, averagePrecision, precisionTop } = judgeWeek(stream.payments, lived.logits, TEST_FROM_DAY);
      const measured =
        `AUC ${auc.toFixed(3)}, AP ${averagePrecision.toFixed(3)}, top 100 ${precisionTop.toFixed(3)}, ` +
        `loss of known labels ${lived.loss.toFixed(0)} on ${lived.known}`;
      const limit = matured ? `${lived.matured.count} learned, ${lived.matured.wrong} of them fraud` : "–";
      const prefix = chargebacksFromDay === null ? "no chargebacks" : "chargebacks";
      rows.push({ name: `${prefix}: ${name}`, measured, limit, ok: true });
      console.log(rows.at(-1)?.name, measured, limit);
    }
  }
  return rows;
}
