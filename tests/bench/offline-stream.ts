import { logitOf } from "@/lib/decibans";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { createScorer, type ScorerOptions } from "@/lib/scorer";
import { DIMENSION } from "@/lib/signals/catalogue";
import type { Row } from "../support/bench";
import { holdCertificate } from "./support/hold-certificate";
import { compareWithIntake } from "./support/intake-agreement";
import { type Judgement, judgeWeek } from "./support/judge-week";
import { FIRST_CHARGEBACK_DAY, FIRST_REVIEW_DAY, liveStream, TEST_FROM_DAY } from "./support/live-stream";
import { readStream, thinFraud } from "./support/stream-payments";
import { StreamVectors } from "./support/stream-vectors";

const ONE_IN = 1_000;

type Options = Omit<ScorerOptions, "dimension" | "offset">;
const RULES: { name: string; options: Options; isDefault?: true }[] = [
  { name: "gradient", options: { method: "gradient" } },
  { name: "newton", options: { method: "newton" } },
  { name: "improper half, λ = 0.1", options: { regularization: 0.1 } },
  { name: "improper half, λ = 0.5", options: {}, isDefault: true },
  { name: "improper full, λ = 0.1", options: { outcomeWeight: 1, regularization: 0.1 } },
  { name: "implicit, λ = 0.1", options: { method: "implicit", regularization: 0.1 } },
  { name: "leader, every 50, λ = 0.1", options: { method: "leader" } },
  { name: "aggregate of six", options: { method: "aggregate" } },
];

/** What a new installation's scorer is held to, of chargebacks a week late and a hundred accounts a day. */
const LIMIT = { averagePrecision: 0.67, precisionTop: 0.29 };
const FOREST = "a random forest with every label: 0.64, 0.29";

export const needs = ["CUPEL_STREAM", "CUPEL_STREAM_FRAUD"];

/**
 * The outside stream lived day by day in memory, on the product's own signals and scorer, once for each rule: with
 * chargebacks, without, and thinned to one fraudulent payment in a thousand.
 */
export async function run(): Promise<Row[]> {
  const { CUPEL_STREAM = "", CUPEL_STREAM_FRAUD = "" } = process.env;
  const payments = await readStream(CUPEL_STREAM, CUPEL_STREAM_FRAUD);
  const whole = new StreamVectors(payments);
  const rows = [await compareWithIntake(whole)];
  const held: boolean[] = [];
  const live = (
    stream: StreamVectors,
    rule: (typeof RULES)[number],
    fromDay: number | null,
    name: string,
  ) => {
    const scorer = createScorer({
      dimension: DIMENSION,
      offset: logitOf(DEFAULT_TERMS.baseRate),
      ...rule.options,
    });
    const lived = liveStream(stream, scorer, { chargebacksFromDay: fromDay });
    const judged = judgeWeek(stream.payments, lived.logits, TEST_FROM_DAY);
    const check = holdCertificate(scorer, lived);
    if (check) held.push(check.regret <= check.certificate);
    const isHeld = rule.isDefault === true && stream === whole && fromDay === FIRST_CHARGEBACK_DAY;
    rows.push(rowOf(`${name}: ${rule.name}`, judged, lived.loss, lived.labels.length, isHeld));
    console.log(rows.at(-1)?.name, rows.at(-1)?.measured);
  };
  for (const rule of RULES) live(whole, rule, FIRST_CHARGEBACK_DAY, "chargebacks");
  for (const rule of RULES.filter(({ isDefault }) => isDefault))
    live(whole, rule, FIRST_REVIEW_DAY, "no label before day 15");
  for (const rule of RULES) live(whole, rule, null, "no chargebacks");
  const thin = new StreamVectors(thinFraud(payments, ONE_IN));
  for (const rule of RULES) live(thin, rule, FIRST_CHARGEBACK_DAY, "one in 1,000");
  const kept = held.filter((each) => each).length;
  return [
    ...rows,
    {
      name: "certificates never below the regret",
      measured: `${kept} of ${held.length} runs that carry one`,
      limit: "all",
      ok: kept === held.length,
    },
  ];
}

function rowOf(name: string, judged: Judgement, loss: number, labels: number, isHeld: boolean): Row {
  const { auc, averagePrecision, precisionTop } = judged;
  return {
    name,
    measured:
      `AUC ${auc.toFixed(3)}, AP ${averagePrecision.toFixed(3)}, top 100 ${precisionTop.toFixed(3)}, ` +
      `loss ${loss.toFixed(0)} on ${labels}`,
    limit: isHeld
      ? `AP at least ${LIMIT.averagePrecision}, top 100 at least ${LIMIT.precisionTop}`
      : `AP, top 100 of ${FOREST}`,
    ok: !isHeld || (averagePrecision >= LIMIT.averagePrecision && precisionTop >= LIMIT.precisionTop),
  };
}
