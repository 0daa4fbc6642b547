"use client";
import type { FloorSort } from "@/lib/floor/codes";
import type { FloorCasesView, FloorPerson } from "@/lib/floor/schema";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Section } from "../ui/section";
import { AssignBar } from "./assign-bar";
import { CaseRows, type Sorting } from "./case-rows";
import { FilterBar } from "./filter-bar";
import { MOST_CASES, PAGE_OF_CASES } from "./filters";
import { type Filters, useFilters } from "./use-filters";
import { useSelection } from "./use-selection";

type CasesSectionProps = {
  list: FloorCasesView;
  people: readonly FloorPerson[];
  onDone: (said: string) => void;
};

/** Undecided cases to hand out: filter, choose, assign. */
export function CasesSection({ list, people, onDone }: CasesSectionProps) {
  const { filters, setFilters, busy } = useFilters();
  const selection = useSelection(list.items.map(({ caseId }) => caseId));
  const sorting: Sorting = {
    sort: filters.sort ?? "due",
    direction: filters.direction ?? "ascending",
    hrefOf: (sort, direction) => addressOf(filters, sort, direction),
  };
  const shown = list.items.length;
  return (
    <Section
      title="Cases"
      lead={
        shown < list.total
          ? `The first ${shown} of ${list.total} undecided cases that fit.`
          : `${list.total === 1 ? "1 undecided case fits" : `${list.total} undecided cases fit`}.`
      }
    >
      <FilterBar filters={filters} setFilters={setFilters} people={people} />
      <AssignBar
        selected={selection.selected}
        items={list.items}
        people={people}
        onClear={selection.clear}
        onDone={onDone}
      />
      {shown === 0 ? (
        <EmptyState title="No case fits">Take a filter away, or wait for payments to come in.</EmptyState>
      ) : (
        <CaseRows items={list.items} selection={selection} sorting={sorting} busy={busy} />
      )}
      {list.next && shown < MOST_CASES && (
        <div className="mt-3">
          <Button
            busy={busy}
            onClick={() => void setFilters({ limit: Math.min(MOST_CASES, shown + PAGE_OF_CASES) })}
          >
            Show more
          </Button>
        </div>
      )}
      {list.next && shown >= MOST_CASES && (
        <p className="mt-3 text-soft">No more than {MOST_CASES} show at once; narrow the filters.</p>
      )}
    </Section>
  );
}

function addressOf(filters: Filters, sort: FloorSort, direction: string): string {
  const query = new URLSearchParams();
  for (const [name, value] of Object.entries({ ...filters, sort, direction })) {
    if (value !== null) query.set(name, String(value));
  }
  return `/floor?${query}`;
}
