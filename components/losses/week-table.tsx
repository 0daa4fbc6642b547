import type { WeekView } from "@/lib/losses/schema";
import { Amount } from "../ui/amount";
import { RowTh, Table, Td, Th } from "../ui/table";
import { basisPointText } from "./rate-words";

type Row = { figure: keyof WeekView["change"]; name: string; meaning: string };

const ROWS: readonly Row[] = [
  { figure: "attempted", name: "Attempted fraud", meaning: "value found fraudulent" },
  { figure: "prevented", name: "Prevented", meaning: "the part of it held or refused" },
  { figure: "gross", name: "Gross loss", meaning: "attempted less prevented, recovered or not" },
  { figure: "missed", name: "Missed", meaning: "the part of gross passed, or decided legitimate" },
  { figure: "recovered", name: "Recovered", meaning: "recoveries booked" },
  { figure: "net", name: "Net loss", meaning: "gross less recovered" },
  { figure: "falsePositive", name: "Legitimate value stopped", meaning: "held or refused, and genuine" },
  { figure: "lostMargin", name: "Lost margin", meaning: "on the legitimate value stopped" },
  { figure: "reviewCost", name: "Cost of review", meaning: "handling time at the policy's rate" },
  { figure: "totalCost", name: "Total cost", meaning: "net loss, lost margin and review" },
];

/** Every amount beside that of the week before. */
export function WeekTable({ view }: { view: WeekView }) {
  const { totals, previous, change, currency } = view;
  return (
    <Table caption={`Amounts of ${view.week} and ${previous.week}`} captionHidden>
      <thead>
        <tr>
          <Th>Amount</Th>
          <Th numeric>{view.week}</Th>
          <Th numeric>{previous.week}</Th>
          <Th numeric>Change</Th>
        </tr>
      </thead>
      <tbody>
        {ROWS.map(({ figure, name, meaning }) => (
          <tr key={figure}>
            <RowTh>
              {name}
              <span className="block text-small text-soft">{meaning}</span>
            </RowTh>
            <Td numeric>
              <Amount amount={totals[figure]} currency={currency} />
            </Td>
            <Td numeric>
              <Amount amount={previous.totals[figure]} currency={currency} />
            </Td>
            <Td numeric>
              {isGrowth(change[figure]) && "+"}
              <Amount amount={change[figure]} currency={currency} />
            </Td>
          </tr>
        ))}
        <tr>
          <RowTh>
            Fraud rate
            <span className="block text-small text-soft">gross loss ÷ value that went through</span>
          </RowTh>
          <Td numeric>{rate(totals.fraudRateBp)}</Td>
          <Td numeric>{rate(previous.totals.fraudRateBp)}</Td>
          <Td numeric>{rateChange(totals.fraudRateBp, previous.totals.fraudRateBp)}</Td>
        </tr>
      </tbody>
    </Table>
  );
}

const isGrowth = (change: string) => /[1-9]/.test(change) && !change.startsWith("-");

const rate = (basisPoints: number | null) =>
  basisPoints === null ? basisPointText(null) : `${basisPointText(basisPoints)} bp`;

function rateChange(now: number | null, before: number | null): string {
  if (now === null || before === null) return "–";
  // Rates are whole hundredths, and their difference shall be one as well.
  const hundredths = Math.round(now * 100) - Math.round(before * 100);
  const size = String(Math.abs(hundredths) / 100);
  return `${hundredths > 0 ? "+" : hundredths < 0 ? "−" : ""}${size} bp`;
}
