import type { ImportDetail } from "@/lib/imports/schema";
import { apiPath } from "../api";
import { ButtonLink } from "../ui/button";
import { countText } from "../ui/count";
import { EmptyState } from "../ui/empty-state";
import { Section } from "../ui/section";
import { RowTh, Table, Td, Th } from "../ui/table";
import { fieldWords } from "./field-words";
import { isUnfinished } from "./import-words";

/** Why rows did not come in. Lines are those of the file, so that an editor finds them. */
export function RowErrors({ view }: { view: ImportDetail }) {
  const { errors, rejected, id } = view;
  return (
    <Section
      title="Rejected rows"
      lead="Lines are counted from the header, which is line 1. Mend them and send the file again, or only those rows under the same header."
      actions={
        errors.length > 0 && (
          <ButtonLink
            href={apiPath("GET /api/imports/{id}/errors", { id })}
            prefetch={false}
            download={`row-errors-${id}.csv`}
          >
            Download all as CSV
          </ButtonLink>
        )
      }
    >
      {errors.length === 0 ? (
        <EmptyState title={isUnfinished(view) ? "None so far" : "No row was rejected"} />
      ) : (
        <Table caption={captionOf(errors.length, rejected)}>
          <thead>
            <tr>
              <Th numeric>Line</Th>
              <Th>Payment</Th>
              <Th>Field</Th>
              <Th>What is wrong</Th>
            </tr>
          </thead>
          <tbody>
            {errors.map(({ row, externalId, path, message }) => (
              <tr key={`${row} ${path} ${message}`}>
                <RowTh className="figures text-right">{row}</RowTh>
                <Td className="break-all">{externalId ?? "not readable"}</Td>
                <Td>{path === "" ? "Whole row" : fieldWords(path)}</Td>
                <Td className="min-w-60">{message}</Td>
              </tr>
            ))}
          </tbody>
        </Table>
      )}
    </Section>
  );
}

function captionOf(shown: number, rejected: number): string {
  const rows = `${countText(rejected)} ${rejected === 1 ? "row was" : "rows were"} rejected`;
  return shown < rejected
    ? `${rows}; the first ${shown} faults are shown, and the download has all`
    : `${rows}; a row can have several faults`;
}
