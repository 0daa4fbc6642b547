import Link from "next/link";
import type { ImportView } from "@/lib/imports/schema";
import { countText } from "../ui/count";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";
import { sizeWords, standingOf } from "./import-words";

export function ImportTable({ items }: { items: readonly ImportView[] }) {
  return (
    <Table caption="Files that came in, newest first" captionHidden>
      <thead>
        <tr>
          <Th>File</Th>
          <Th>State</Th>
          <Th numeric>Rows</Th>
          <Th numeric>New</Th>
          <Th numeric>Known already</Th>
          <Th numeric>Rejected</Th>
          <Th numeric>Cases</Th>
          <Th>Sent by</Th>
          <Th>When</Th>
        </tr>
      </thead>
      <tbody>
        {items.map((item) => (
          <ImportRow key={item.id} item={item} />
        ))}
      </tbody>
    </Table>
  );
}

function ImportRow({ item }: { item: ImportView }) {
  const { id, fileName, source, sizeBytes, rowsDone, created, duplicates, rejected, casesOpened } = item;
  return (
    <tr>
      <RowTh className="min-w-44">
        <Link href={`/intake/${id}`} className="break-all font-strong underline">
          {fileName}
        </Link>
        <span className="block text-small text-soft">
          {source}, {sizeWords(sizeBytes)}
        </span>
      </RowTh>
      <Td className="min-w-36">{standingOf(item)}</Td>
      <Td numeric>{countText(rowsDone)}</Td>
      <Td numeric>{countText(created)}</Td>
      <Td numeric>{countText(duplicates)}</Td>
      <Td numeric>{countText(rejected)}</Td>
      <Td numeric>{countText(casesOpened)}</Td>
      <Td>{item.by ?? "nobody"}</Td>
      <Td>
        <Time at={item.createdAt} />
      </Td>
    </tr>
  );
}
