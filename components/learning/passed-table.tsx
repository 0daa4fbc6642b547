import type { PassedView } from "@/lib/learning/passed-schema";
import { formatAmount, groupDigits } from "@/lib/money";
import { countText } from "../ui/count";
import { RowTh, Table, Td, Th } from "../ui/table";

/** What the estimate rests on. */
export function PassedTable({ view }: { view: PassedView }) {
  const { from, to, passed, drawn, decided, waiting, lapsed, foundFraudulent, reported, baseCurrency } = view;
  const { code } = baseCurrency;
  const rows: [name: string, count: number, note?: string][] = [
    ["Passed", passed, "below the review line"],
    ["Drawn at random", drawn],
    ["Decided", decided],
    ["Found fraudulent", foundFraudulent, "among those decided"],
    ["Waiting", waiting],
    ["Lapsed", lapsed, "closed without a verdict"],
    [
      "Reported by others",
      reported.fraudulent,
      `fraudulent, drawn or not; ${groupDigits(formatAmount(reported.valueMinor, code))} ${code}`,
    ],
  ];
  return (
    <Table caption={`Payments of ${from} to ${to}, UTC`} className="max-w-xl">
      <thead>
        <tr>
          <Th>Payments</Th>
          <Th numeric>Number</Th>
        </tr>
      </thead>
      <tbody>
        {rows.map(([name, count, note]) => (
          <tr key={name}>
            <RowTh>
              {name}
              {note && <span className="text-small text-soft"> {note}</span>}
            </RowTh>
            <Td numeric>{countText(count)}</Td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}
