import { CHANNEL_WORDS, TYPOLOGY_WORDS } from "../components/words";
import type { WeekView } from "../lib/losses/schema";
import { groupDigits } from "../lib/money";

export type SummaryRow = { label: string; value: string; note?: string; path?: string };
export type SummarySection = { heading: string; lead?: string; rows: SummaryRow[]; empty?: string };
export type SummaryWords = {
  subject: string;
  title: string;
  period: string;
  /** How far the figures can be trusted yet, and what they leave out. */
  cautions: string[];
  sections: SummarySection[];
};

const NOT_DEFINED = "not defined";

/** What the weekly summary says, once for its HTML and its plain text. */
export function summaryWords(view: WeekView): SummaryWords {
  const [year = "", number = ""] = view.week.split("-W");
  const title = `Losses in week ${Number(number)} of ${year}`;
  return {
    subject: title,
    title,
    period: `${dayWords(view.from, view)} to ${dayWords(lastDayOf(view), view)}, by the clock of ${view.timeZone}`,
    cautions: cautionsOf(view),
    sections: [lossRows(view), costRows(view), largestRows(view), typologyRows(view), workloadRows(view)],
  };
}

function lossRows(view: WeekView): SummarySection {
  const { totals, change } = view;
  const row = (label: string, figure: keyof WeekView["change"], note?: string): SummaryRow => ({
    label,
    value: money(totals[figure], view),
    note: [changeWords(change[figure], view), note].filter(Boolean).join("; "),
  });
  const detection =
    totals.valueDetection === null ? NOT_DEFINED : `${percent(totals.valueDetection)} of the value attempted`;
  return {
    heading: "Losses",
    lead: "Against the week before, as it was known at the same age.",
    rows: [
      row("Attempted fraud", "attempted"),
      row("Prevented (held or refused)", "prevented"),
      { label: "Value detection", value: detection },
      row("Gross loss", "gross"),
      row("Missed (passed, or decided legitimate)", "missed", "part of the gross loss"),
      row("Recovered", "recovered"),
      row("Net loss", "net"),
      {
        label: "Fraud rate",
        value: rate(totals.fraudRateBp),
        note: `gross loss in ${money(totals.settled, view)} that went through`,
      },
    ],
  };
}

function costRows(view: WeekView): SummarySection {
  const { totals, change } = view;
  const perCase = totals.costPerCase === null ? NOT_DEFINED : money(totals.costPerCase, view);
  return {
    heading: "What it cost",
    rows: [
      { label: "Legitimate value stopped", value: money(totals.falsePositive, view) },
      { label: "Margin lost on it", value: money(totals.lostMargin, view) },
      {
        label: "Cost of review",
        value: money(totals.reviewCost, view),
        note: `per case decided: ${perCase}`,
      },
      {
        label: "Total cost (net loss, lost margin, review)",
        value: money(totals.totalCost, view),
        note: `${rate(totals.totalCostBp)}; ${changeWords(change.totalCost, view)}`,
      },
    ],
  };
}

function largestRows(view: WeekView): SummarySection {
  return {
    heading: "Largest fraudulent payments",
    empty: "No payment of this week has been found fraudulent.",
    rows: view.largest.map((one) => ({
      label: one.number === null ? `Payment without a case` : `Case ${one.number}`,
      value: money(one.attempted, view),
      note: `${CHANNEL_WORDS[one.channel]}; prevented: ${money(one.prevented, view)}`,
      ...(one.caseId && { path: `/cases/${one.caseId}` }),
    })),
  };
}

function typologyRows(view: WeekView): SummarySection {
  return {
    heading: "By typology",
    empty: "Nothing to tell apart.",
    rows: view.typologies.map((one) => ({
      label: TYPOLOGY_WORDS[one.typology],
      value: money(one.attempted, view),
      note: `${one.findings} ${one.findings === 1 ? "payment" : "payments"}; prevented: ${money(one.prevented, view)}`,
    })),
  };
}

function workloadRows(view: WeekView): SummarySection {
  const { workload, totals } = view;
  const { precision } = totals;
  const share = precision
    ? `${percent(precision.share)}, 95 % interval ${percent(precision.low)} to ${percent(precision.high)}`
    : NOT_DEFINED;
  return {
    heading: "Workload",
    rows: [
      { label: "Cases opened", value: String(workload.opened) },
      { label: "Cases decided", value: String(workload.decided) },
      { label: "Waiting at the end of the week", value: String(workload.waiting) },
      { label: "Past their deadline among them", value: String(workload.overdue) },
      { label: "Lapsed (nobody reached them in time)", value: String(workload.lapsed) },
      {
        label: "Fraudulent among the alerts decided",
        value: share,
        ...(precision && { note: `${precision.count} of ${precision.of}` }),
      },
    ],
  };
}

function cautionsOf(view: WeekView): string[] {
  const { maturity, totals } = view;
  const cautions: string[] = [];
  if (maturity.state !== "mature") {
    cautions.push(
      `Provisional: chargebacks and reports about these payments may arrive until ${dayWords(maturity.maturesAt, view)}, so the losses can still grow.`,
    );
  }
  if (totals.unpriced > 0) {
    cautions.push(
      `${totals.unpriced} of ${totals.payments} payments are in currencies without a rate and in no amount here.`,
    );
  }
  return cautions;
}

const money = (amount: string, view: { currency: string }): string =>
  `${groupDigits(amount)}\u00a0${view.currency}`;

function changeWords(change: string, view: WeekView): string {
  if (/^-?0(\.0+)?$/.test(change)) return "as in the week before";
  const size = money(change.replace(/^-/, ""), view);
  return `${size} ${change.startsWith("-") ? "less" : "more"} than the week before`;
}

const rate = (basisPoints: number | null): string =>
  basisPoints === null ? NOT_DEFINED : `${basisPoints}\u00a0basis points`;

const percent = (share: number): string => `${(100 * share).toFixed(1)}\u00a0%`;

function dayWords(instant: string, { timeZone }: WeekView): string {
  const say = (options: Intl.DateTimeFormatOptions) =>
    new Intl.DateTimeFormat("en-GB", { ...options, timeZone }).format(new Date(instant));
  return `${say({ weekday: "long" })} ${say({ day: "numeric", month: "long", year: "numeric" })}`;
}

const lastDayOf = (view: WeekView): string => new Date(new Date(view.until).getTime() - 1).toISOString();
