// biome-ignore-all lint/a11y/useSemanticElements: rows are placed by transform, which table elements cannot be
// biome-ignore-all lint/a11y/useFocusableInteractive: the grid holds the focus and names the cell by aria-activedescendant
"use client";
import { useVirtualizer } from "@tanstack/react-virtual";
import { type KeyboardEvent, useEffect, useRef, useState } from "react";
import type { CaseView, QueueItem } from "@/lib/cases/schema";
import type { Thresholds } from "../case/balance-axis";
import { Button } from "../ui/button";
import { countText } from "../ui/count";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Skeleton } from "../ui/skeleton";
import { moveInGrid } from "./grid-moves";
import { COLUMNS, cellId, GRID_TEMPLATE, RankedRow, ROW_PX } from "./ranked-row";
import type { RankedList as List } from "./use-ranked-list";

type RankedListProps = {
  list: List;
  /** The first is in hand, the others come next. */
  ready: readonly CaseView[];
  thresholds: Thresholds | null;
  onPick: (item: QueueItem) => void;
  onLeave: () => void;
};

/** The server's order of waiting cases. Only the rows in view are drawn, however many there are. */
export function RankedList({ list, ready, thresholds, onPick, onLeave }: RankedListProps) {
  return (
    <section aria-label="Waiting cases" className="flex min-h-0 flex-1 flex-col">
      <div className="flex min-h-8 items-center justify-between gap-3 px-2 text-small">
        <h2 className="font-strong">
          Waiting <span className="figures font-plain text-soft">{countText(list.total)}</span>
        </h2>
        <span role="status" className="text-soft">
          {list.orderChanged && (
            <>
              Order changed{" "}
              <Button look="quiet" small className="px-0" onClick={list.showNewOrder}>
                Show it
              </Button>
            </>
          )}
        </span>
      </div>
      {list.failed && (
        <Notice kind="error" title="The list did not load">
          {list.failed.message}{" "}
          <Button look="quiet" small className="px-0" onClick={list.showNewOrder}>
            Try again
          </Button>
        </Notice>
      )}
      {list.loading ? (
        <Skeleton lines={8} className="mx-2 h-[38px]" />
      ) : list.items.length === 0 && !list.failed ? (
        <EmptyState title="Nothing waits">New cases appear here as they come in.</EmptyState>
      ) : (
        <Grid {...{ list, ready, thresholds, onPick, onLeave }} />
      )}
    </section>
  );
}

function Grid({ list, ready, thresholds, onPick, onLeave }: RankedListProps) {
  const { items, loadMore } = list;
  const scroller = useRef<HTMLDivElement>(null);
  const presence = useRef({ pointer: false, focus: false });
  const [place, setPlace] = useState({ row: 0, column: 0 });
  const [focused, setFocused] = useState(false);
  const active = items[place.row];
  const virtual = useVirtualizer({
    count: items.length,
    getScrollElement: () => scroller.current,
    estimateSize: () => ROW_PX,
    overscan: 8,
    getItemKey: (index) => items[index]?.caseId ?? index,
  });
  const rows = virtual.getVirtualItems();
  const last = rows.at(-1)?.index ?? 0;
  useEffect(() => {
    if (last >= items.length - 30) loadMore();
  }, [last, items.length, loadMore]);

  const note = (change: Partial<typeof presence.current>) => {
    Object.assign(presence.current, change);
    list.setBusy(presence.current.pointer || presence.current.focus);
  };
  const press = (event: KeyboardEvent) => {
    if (event.altKey || event.metaKey) return;
    if (event.key === "Enter" && active && !event.repeat) return onPick(active);
    if (event.key === "Escape") return onLeave();
    const page = Math.max(1, Math.floor((scroller.current?.clientHeight ?? ROW_PX) / ROW_PX) - 1);
    const next = moveInGrid(place, event, { rows: items.length, columns: COLUMNS.length, page });
    if (!next) return;
    event.preventDefault();
    setPlace(next);
    virtual.scrollToIndex(next.row);
  };
  return (
    <div
      ref={scroller}
      role="grid"
      tabIndex={0}
      aria-label="Waiting cases in order of rank"
      aria-rowcount={list.total + 1}
      aria-colcount={COLUMNS.length}
      aria-activedescendant={focused && active ? cellId(active.caseId, place.column) : undefined}
      onKeyDown={press}
      onFocus={() => {
        setFocused(true);
        note({ focus: true });
      }}
      onBlur={() => {
        setFocused(false);
        note({ focus: false });
      }}
      onPointerEnter={() => note({ pointer: true })}
      onPointerLeave={() => note({ pointer: false })}
      className="relative min-h-64 flex-1 overflow-y-auto overscroll-contain border-rule border-t bench:min-h-0"
    >
      <div
        role="row"
        aria-rowindex={1}
        className={`${GRID_TEMPLATE} sticky top-0 z-10 border-edge border-b bg-paper py-1 text-small`}
      >
        {COLUMNS.map((name, column) => (
          <div
            key={name}
            role="columnheader"
            aria-colindex={column + 1}
            className={`font-strong ${column > 1 ? "text-right" : ""}`}
          >
            {name}
          </div>
        ))}
      </div>
      <div role="rowgroup" className="relative" style={{ height: virtual.getTotalSize() }}>
        {rows.map(({ index, start, key }) => {
          const item = items[index];
          return item ? (
            <RankedRow
              key={key}
              item={item}
              rank={index + 1}
              topPx={start}
              mine={mineOf(item.caseId, ready)}
              activeColumn={focused && index === place.row ? place.column : null}
              thresholds={thresholds}
              onPick={() => onPick(item)}
            />
          ) : null;
        })}
      </div>
    </div>
  );
}

function mineOf(caseId: string, ready: readonly CaseView[]): "in hand" | "next" | null {
  const place = ready.findIndex((one) => one.caseId === caseId && one.mine);
  if (place === 0) return "in hand";
  return place > 0 ? "next" : null;
}
