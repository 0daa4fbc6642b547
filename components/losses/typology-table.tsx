import type { WeekView } from "@/lib/losses/schema";
import { Amount } from "../ui/amount";
import { RowTh, Table, Td, Th } from "../ui/table";
import { TYPOLOGY_WORDS } from "../words";

export function TypologyTable({ view }: { view: WeekView }) {
  return (
    <Table caption="Fraud by typology" captionHidden>
      <thead>
        <tr>
          <Th>Typology</Th>
          <Th numeric>Payments</Th>
          <Th numeric>Attempted</Th>
          <Th numeric>Prevented</Th>
        </tr>
      </thead>
      <tbody>
        {view.typologies.map((one) => (
          <tr key={one.typology}>
            <RowTh>{TYPOLOGY_WORDS[one.typology]}</RowTh>
            <Td numeric>{one.findings}</Td>
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
