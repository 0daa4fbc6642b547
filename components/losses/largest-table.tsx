import Link from "next/link";
import type { WeekView } from "@/lib/losses/schema";
import { Amount } from "../ui/amount";
import { RowTh, Table, Td, Th } from "../ui/table";
import { CHANNEL_WORDS } from "../words";

export function LargestTable({ view }: { view: WeekView }) {
  return (
    <Table caption="Fraudulent payments of the highest value" captionHidden>
      <thead>
        <tr>
          <Th>Case</Th>
          <Th>Payment</Th>
          <Th>Channel</Th>
          <Th numeric>Attempted</Th>
          <Th numeric>Prevented</Th>
        </tr>
      </thead>
      <tbody>
        {view.largest.map((one) => (
          <tr key={one.transactionId}>
            <RowTh>
              {one.caseId ? (
                <Link
                  href={`/cases/${one.caseId}`}
                  className="underline decoration-edge underline-offset-4 hover:decoration-ink"
                >
                  Case {one.number}
                </Link>
              ) : (
                "Without a case"
              )}
            </RowTh>
            <Td className="figures whitespace-nowrap">{one.externalId}</Td>
            <Td>{CHANNEL_WORDS[one.channel]}</Td>
            <Td numeric>
              <Amount amount={one.attempted} currency={view.currency} />
            </Td>
            <Td numeric>
              <Amount amount={one.prevented} currency={view.currency} />
            </Td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}
