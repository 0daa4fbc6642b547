import { csvLine } from "@/lib/csv";
import { Table, Td, Th } from "./table";

export type ChartColumn<Row> = {
  /** Over the column. */
  name: string;
  /** The column's name in the file: "decibans_from". */
  field: string;
  value: (row: Row) => string | number | null;
  /** How a value reads on the screen, where it is not written as it is. */
  say?: (row: Row) => string;
  /** Words rather than figures: set from the left, and broken where they are long. */
  isText?: true;
};

type ChartDataProps<Row> = {
  /** Says what the rows are. */
  caption: string;
  /** Without the ending. */
  fileName: string;
  columns: readonly ChartColumn<Row>[];
  rows: readonly Row[];
};

/** What a chart is drawn from: a table to open beneath it, and the same as a file. */
export function ChartData<Row>({ caption, fileName, columns, rows }: ChartDataProps<Row>) {
  return (
    <details className="mt-2">
      <summary className="w-fit text-small underline decoration-edge underline-offset-4">
        Show as table
      </summary>
      <div className="mt-2 max-h-96 overflow-y-auto">
        <Table caption={caption} captionHidden className="w-auto! text-small">
          <thead>
            <tr>
              {columns.map(({ name, field, isText }) => (
                <Th key={field} numeric={!isText}>
                  {name}
                </Th>
              ))}
            </tr>
          </thead>
          <tbody>
            {rows.map((row) => (
              <tr key={columns.map(({ value }) => value(row)).join(" ")}>
                {columns.map(({ field, value, say, isText }) => (
                  <Td key={field} numeric={!isText} className={isText ? "min-w-32" : "whitespace-nowrap"}>
                    {say ? say(row) : value(row)}
                  </Td>
                ))}
              </tr>
            ))}
          </tbody>
        </Table>
      </div>
      <a
        download={`${fileName}.csv`}
        href={`data:text/csv;charset=utf-8,${encodeURIComponent(csvOf(columns, rows))}`}
        className="mt-2 inline-block text-small underline decoration-edge underline-offset-4 hover:decoration-ink"
      >
        Download as CSV
      </a>
    </details>
  );
}

function csvOf<Row>(columns: readonly ChartColumn<Row>[], rows: readonly Row[]): string {
  const head = csvLine(columns.map(({ field }) => field));
  return head + rows.map((row) => csvLine(columns.map(({ value }) => value(row)))).join("");
}
