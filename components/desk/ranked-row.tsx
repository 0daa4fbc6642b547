// biome-ignore-all lint/a11y/useSemanticElements: rows are placed by transform, which table elements cannot be
// biome-ignore-all lint/a11y/useFocusableInteractive: the grid holds the focus and names the cell by aria-activedescendant
"use client";
import type { ReactNode } from "react";
import type { QueueItem } from "@/lib/cases/schema";
import type { Thresholds } from "../case/balance-axis";
import { Amount } from "../ui/amount";
import { Decibans } from "../ui/probability";
import { ScoreMark } from "../ui/score-mark";
import { spanWords } from "../ui/span-words";
import { useNowMs } from "../ui/time-left";
import { CASE_STATE_WORDS, CHANNEL_WORDS } from "../words";

export const ROW_PX = 46;
export const COLUMNS = ["Case", "Evidence", "Amount", "Due"] as const;
export const GRID_TEMPLATE =
  "grid grid-cols-[minmax(0,1fr)_3.25rem_6.5rem_4.5rem] gap-x-2 px-2 sm:grid-cols-[minmax(0,1fr)_6rem_7.5rem_5.5rem] sm:gap-x-3";

export const cellId = (caseId: string, column: number) => `ranked-${caseId}-${column}`;

type RankedRowProps = {
  item: QueueItem;
  rank: number;
  topPx: number;
  /** Whether this person works on it just now, or will next. */
  mine: "in hand" | "next" | null;
  activeColumn: number | null;
  /** Null while scores are hidden or the thresholds are not here yet. */
  thresholds: Thresholds | null;
  onPick: () => void;
};

export function RankedRow({ item, rank, topPx, mine, activeColumn, thresholds, onPick }: RankedRowProps) {
  const settled = item.state === "decided" || item.state === "lapsed";
  const cell = (column: number, content: ReactNode, className = "") => (
    <div
      role="gridcell"
      id={cellId(item.caseId, column)}
      aria-colindex={column + 1}
      className={`min-w-0 ${className} ${activeColumn === column ? "outline-2 outline-accent -outline-offset-1" : ""}`}
    >
      {content}
    </div>
  );
  return (
    // biome-ignore lint/a11y/useKeyWithClickEvents: the grid holds the focus and opens rows by Enter
    <div
      role="row"
      aria-rowindex={rank + 1}
      aria-selected={mine === "in hand"}
      onClick={onPick}
      className={`${GRID_TEMPLATE} absolute inset-x-0 cursor-pointer items-center border-b border-rule text-small hover:bg-raised ${mine === "in hand" ? "bg-raised shadow-[inset_3px_0_0_var(--color-accent)]" : ""} ${settled ? "opacity-60" : ""}`}
      style={{ height: ROW_PX, transform: `translateY(${topPx}px)` }}
    >
      {cell(
        0,
        <>
          <span className={`block truncate ${settled ? "line-through" : ""}`}>
            <span className="font-strong tabular-nums">{item.number}</span>{" "}
            <StateWords item={item} mine={mine} />
          </span>
          <span className="block truncate text-soft">{item.accountId}</span>
        </>,
      )}
      {cell(
        1,
        thresholds && item.evidenceDecibans !== null && item.probability !== null ? (
          <>
            <ScoreMark
              decibans={item.evidenceDecibans}
              probability={item.probability}
              reviewDecibans={thresholds.reviewDecibans}
              holdDecibans={thresholds.holdDecibans}
            />
            <span aria-hidden="true" className="block">
              <Decibans decibans={item.evidenceDecibans} />
            </span>
          </>
        ) : (
          <span className="text-soft">hidden</span>
        ),
      )}
      {cell(
        2,
        <>
          <Amount amount={item.amount} currency={item.currency} aligned />
          <span className="block truncate text-soft">{CHANNEL_WORDS[item.channel]}</span>
        </>,
        "text-right",
      )}
      {cell(3, <DueWords item={item} />, "text-right")}
    </div>
  );
}

function DueWords({ item }: { item: QueueItem }) {
  const held = item.holdExpiresAt !== null && item.paymentState === "held";
  const nowMs = useNowMs();
  const until = held && item.holdExpiresAt ? item.holdExpiresAt : item.dueAt;
  const leftMs = nowMs === null ? null : Date.parse(until) - nowMs;
  const over = leftMs !== null && leftMs < 0;
  return (
    <time dateTime={until} title={`${until.slice(0, 16).replace("T", " ")} UTC`}>
      <span className={`block whitespace-nowrap tabular-nums ${over ? "font-strong" : ""}`}>
        {leftMs !== null && spanWords(Math.abs(leftMs))}
      </span>
      <span className="block text-soft">
        {held ? (over ? "hold over" : "hold left") : over ? "overdue" : "left"}
      </span>
    </time>
  );
}

function StateWords({ item, mine }: Pick<RankedRowProps, "item" | "mine">) {
  if (mine) return <span className="text-accent">{mine}</span>;
  if (item.claimedBy) return <span className="text-soft">{item.claimedBy.name}</span>;
  if (item.state !== "open")
    return <span className="text-soft">{CASE_STATE_WORDS[item.state].toLowerCase()}</span>;
  if (item.kind === "sample") return <span className="text-soft">sample</span>;
  return null;
}
