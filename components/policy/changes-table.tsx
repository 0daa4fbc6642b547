import type { TermChange } from "@/lib/policy/changes";
import { RowTh, Table, Td, Th } from "../ui/table";
import { type Currency, sayValue, termAt } from "./term-values";

type ChangesTableProps = {
  changes: readonly TermChange[];
  currency: Currency;
  /** Over the columns: "In force", "Version 3". */
  before: string;
  after: string;
};

/** Every term that differs, old beside new. */
export function ChangesTable({ changes, currency, before, after }: ChangesTableProps) {
  return (
    <Table caption={`What changes: ${before} beside ${after}`} captionHidden>
      <thead>
        <tr>
          <Th>Term</Th>
          <Th>{before}</Th>
          <Th>{after}</Th>
        </tr>
      </thead>
      <tbody>
        {changes.map(({ path, from, to }) => {
          const term = termAt(path);
          return (
            <tr key={path}>
              <RowTh>{term.label}</RowTh>
              <Td className="text-soft">{sayValue(term, from, currency)}</Td>
              <Td className="font-strong">{sayValue(term, to, currency)}</Td>
            </tr>
          );
        })}
      </tbody>
    </Table>
  );
}
