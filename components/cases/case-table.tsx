"use client";
import Link from "next/link";
import type { QueueItem } from "@/lib/cases/schema";
import type { Thresholds } from "../case/balance-axis";
import { Amount } from "../ui/amount";
import { Decibans } from "../ui/probability";
import { ScoreMark } from "../ui/score-mark";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";
import { TimeLeft } from "../ui/time-left";
import { CASE_KIND_WORDS, CASE_STATE_WORDS, CHANNEL_WORDS, ZONE_WORDS } from "../words";

type CaseTableProps = { items: readonly QueueItem[]; total: number; lines: Thresholds | null };

export function CaseTable({ items, total, lines }: CaseTableProps) {
  return (
    <Table caption={`Waiting cases in order of rank, ${items.length} of ${total}`} captionHidden>
      <thead>
        <tr>
          <Th>Case</Th>
          <Th>Evidence</Th>
          <Th numeric>Amount</Th>
          <Th>Channel</Th>
          <Th>Account</Th>
          <Th>Payment</Th>
          <Th>Zone</Th>
          <Th>State</Th>
          <Th>Due</Th>
        </tr>
      </thead>
      <tbody>
        {items.map((item) => (
          <tr key={item.caseId} className="hover:bg-raised">
            <RowTh>
              <Link
                href={`/cases/${item.caseId}`}
                className="font-strong tabular-nums underline decoration-edge underline-offset-2"
              >
                {item.number}
              </Link>
            </RowTh>
            <Td className="whitespace-nowrap">
              {lines && item.evidenceDecibans !== null && item.probability !== null && (
                <span className="mr-2 inline-block w-24">
                  <ScoreMark
                    decibans={item.evidenceDecibans}
                    probability={item.probability}
                    reviewDecibans={lines.reviewDecibans}
                    holdDecibans={lines.holdDecibans}
                  />
                </span>
              )}
              <span aria-hidden="true">
                {item.evidenceDecibans === null ? "hidden" : <Decibans decibans={item.evidenceDecibans} />}
              </span>
            </Td>
            <Td numeric>
              <Amount amount={item.amount} currency={item.currency} aligned />
            </Td>
            <Td>{CHANNEL_WORDS[item.channel]}</Td>
            <Td className="figures">{item.accountId}</Td>
            <Td>
              <Time at={item.occurredAt} as="short" />
            </Td>
            <Td>
              {ZONE_WORDS[item.zone]}
              {item.kind === "sample" && (
                <span className="text-soft">, {CASE_KIND_WORDS.sample.toLowerCase()}</span>
              )}
            </Td>
            <Td>
              <StateWords item={item} />
            </Td>
            <Td>
              <TimeLeft until={item.dueAt} before="in" after="overdue by" />
            </Td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

function StateWords({ item }: { item: QueueItem }) {
  if (item.claimedBy) return <>In hand, {item.claimedBy.name}</>;
  if (item.assignedTo) {
    return (
      <>
        {CASE_STATE_WORDS[item.state]}, for {item.assignedTo.name}
      </>
    );
  }
  return <>{CASE_STATE_WORDS[item.state]}</>;
}
