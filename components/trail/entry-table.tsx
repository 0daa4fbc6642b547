import type { TrailEntryView } from "@/lib/trail/schema";
import { Table, Th } from "../ui/table";
import { EntryRow } from "./entry-row";

type EntryTableProps = { caption: string; entries: readonly TrailEntryView[] };

export function EntryTable({ caption, entries }: EntryTableProps) {
  return (
    <Table caption={caption} captionHidden>
      <thead>
        <tr>
          <Th>Place</Th>
          <Th>Time</Th>
          <Th>Act</Th>
          <Th>By</Th>
          <Th>On</Th>
          <Th>Detail</Th>
        </tr>
      </thead>
      <tbody>
        {entries.map((entry) => (
          <EntryRow key={entry.seq} entry={entry} />
        ))}
      </tbody>
    </Table>
  );
}
