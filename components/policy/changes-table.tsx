import type { TermChange } from "@/lib/policy/changes";
import { RowTh, Table, Td, Th } from "../ui/table";
import { type Currency, sayValue, termAt } from "./term-values";
import { TERM_GROUPS } from "./terms";

const PLACES = new Map(TERM_GROUPS.flatMap(({ terms }) => terms).map(({ path }, place) => [path, place]));

type ChangesTableProps = {
  changes: readonly TermChange[];
  currency: Currency;
  /** Over the columns: "In force", "Version 3". */
  before: string;
  after: string;
  /** Tells this table from others of its kind on the screen: "proposal 2". */
  of: string;
};

/** Every term that differs, old beside new. */
export function ChangesTable({ changes, currency, before, after, of }: ChangesTableProps) {
  return (
    <Table caption={`What changes, ${of}`} captionHidden>
      <thead>
        <tr>
          <Th>Term</Th>
          <Th>{before}</Th>
          <Th>{after}</Th>
        </tr>
      </thead>
      <tbody>
        {inFormOrder(changes).map(({ path, from, to }) => {
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

/** As the form has them, so that what belongs together stands together. */
function inFormOrder(changes: readonly TermChange[]): TermChange[] {
  const place = ({ path }: TermChange) => PLACES.get(path) ?? PLACES.size;
  return changes.toSorted((a, b) => place(a) - place(b));
}
