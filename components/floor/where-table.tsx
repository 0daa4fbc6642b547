import Link from "next/link";
import { RowTh, Table, Td, Th } from "../ui/table";

type WhereRow = { code: string; name: string; total: number; overdue: number; expiringHolds: number };

type WhereTableProps = { by: "zone" | "channel"; title: string; rows: readonly WhereRow[] };

/** Undecided cases by zone or by channel; each name leads to its cases. */
export function WhereTable({ by, title, rows }: WhereTableProps) {
  return (
    <Table caption={`Undecided cases by ${by}`} captionHidden>
      <thead>
        <tr>
          <Th>{title}</Th>
          <Th numeric>Undecided</Th>
          <Th numeric>Overdue</Th>
          <Th numeric>Holds about to end</Th>
        </tr>
      </thead>
      <tbody>
        {rows.map(({ code, name, total, overdue, expiringHolds }) => (
          <tr key={code}>
            <RowTh>
              <Link
                href={`/floor?${by}=${code}`}
                scroll={false}
                className="underline decoration-edge underline-offset-4 hover:decoration-ink"
              >
                {name}
              </Link>
            </RowTh>
            <Td numeric>{total}</Td>
            <Td numeric>{overdue}</Td>
            <Td numeric>{expiringHolds}</Td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}
