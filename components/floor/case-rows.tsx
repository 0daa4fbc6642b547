"use client";
import Link from "next/link";
import type { FloorSort } from "@/lib/floor/codes";
import type { FloorCase } from "@/lib/floor/schema";
import { Amount } from "../ui/amount";
import { RowTh, SortableTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";
import { TimeLeft } from "../ui/time-left";
import { CASE_KIND_WORDS, CASE_STATE_WORDS, CHANNEL_WORDS, ZONE_WORDS } from "../words";
import type { Selection } from "./use-selection";

export type Sorting = {
  sort: FloorSort;
  direction: "ascending" | "descending";
  hrefOf: (sort: FloorSort, direction: "ascending" | "descending") => string;
};

type CaseRowsProps = { items: readonly FloorCase[]; selection: Selection; sorting: Sorting; busy: boolean };

export function CaseRows({ items, selection, sorting, busy }: CaseRowsProps) {
  const { selected, toggle, toggleAll, onKeyDown } = selection;
  const chosen = new Set(selected);
  return (
    <Table caption="Undecided cases" captionHidden aria-busy={busy} onKeyDown={onKeyDown}>
      <thead>
        <tr>
          <Th className="w-8">
            <input
              type="checkbox"
              aria-label="Choose all that are shown"
              checked={items.length > 0 && selected.length === items.length}
              onChange={toggleAll}
              className="size-4.5 accent-accent"
            />
          </Th>
          <Sorted sorting={sorting} by="number">
            Case
          </Sorted>
          <Sorted sorting={sorting} by="amount" numeric>
            Amount
          </Sorted>
          <Th>Channel</Th>
          <Th>Zone</Th>
          <Th>State</Th>
          <Th>With</Th>
          <Sorted sorting={sorting} by="due">
            Due
          </Sorted>
          <Sorted sorting={sorting} by="hold">
            Hold ends
          </Sorted>
          <Sorted sorting={sorting} by="opened">
            Opened
          </Sorted>
        </tr>
      </thead>
      <tbody>
        {items.map((item) => (
          <tr key={item.caseId} className={chosen.has(item.caseId) ? "bg-sunk" : undefined}>
            <Td>
              <input
                type="checkbox"
                data-row={item.caseId}
                aria-label={`Choose case ${item.number}`}
                checked={chosen.has(item.caseId)}
                onClick={(event) => toggle(item.caseId, event)}
                onChange={() => {}}
                className="size-4.5 accent-accent"
              />
            </Td>
            <RowTh>
              <Link
                href={`/cases/${item.caseId}`}
                className="figures underline decoration-edge underline-offset-4 hover:decoration-ink"
              >
                {item.number}
              </Link>
              <span className="block max-w-44 truncate text-small text-soft" title={item.externalId}>
                {item.externalId}
              </span>
            </RowTh>
            <Td numeric>
              <Amount amount={item.amount} currency={item.currency} aligned />
            </Td>
            <Td>{CHANNEL_WORDS[item.channel]}</Td>
            <Td>
              {ZONE_WORDS[item.zone]}
              {item.kind !== "alert" && (
                <span className="block text-small text-soft">{CASE_KIND_WORDS[item.kind]}</span>
              )}
            </Td>
            <Td>{CASE_STATE_WORDS[item.state]}</Td>
            <Td>
              <With item={item} />
            </Td>
            <Td>
              <TimeLeft until={item.dueAt} before="" after="overdue by" />
            </Td>
            <Td>
              {item.holdExpiresAt ? <TimeLeft until={item.holdExpiresAt} before="" after="ended" ago /> : "–"}
            </Td>
            <Td>
              <Time at={item.openedAt} as="short" />
            </Td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

/** In whose hands, and for whom it is meant where that is somebody else. */
function With({ item: { claimedBy, assignedTo } }: { item: FloorCase }) {
  if (!claimedBy && !assignedTo) return <span className="text-soft">nobody</span>;
  const isOther = assignedTo && assignedTo.id !== claimedBy?.id;
  return (
    <>
      {claimedBy && <span className="block">{claimedBy.name}</span>}
      {isOther && <span className="block text-small text-soft">assigned to {assignedTo.name}</span>}
    </>
  );
}

type SortedProps = { sorting: Sorting; by: FloorSort; numeric?: boolean; children: string };

function Sorted({ sorting, by, numeric = false, children }: SortedProps) {
  const isCurrent = sorting.sort === by;
  const turned = isCurrent && sorting.direction === "ascending" ? "descending" : "ascending";
  return (
    <SortableTh
      sorted={isCurrent ? sorting.direction : "none"}
      href={sorting.hrefOf(by, turned)}
      numeric={numeric}
    >
      {children}
    </SortableTh>
  );
}
