"use client";
import { UNDECIDED_STATES } from "@/lib/cases/codes";
import type { FloorPerson } from "@/lib/floor/schema";
import { FilterChoice, FilterForm } from "../ui/filter-form";
import { CASE_STATE_WORDS, CHANNEL_WORDS, ZONE_WORDS } from "../words";
import type { Filters, SetFilters } from "./use-filters";

type FilterBarProps = { filters: Filters; setFilters: SetFilters; people: readonly FloorPerson[] };

const CONCERN_WORDS = { overdue: "Overdue", expiring: "Hold about to end" };
const NONE = {
  state: null,
  zone: null,
  channel: null,
  person: null,
  concern: null,
  search: null,
  limit: null,
} as const;

export function FilterBar({ filters, setFilters, people }: FilterBarProps) {
  const set = (change: Parameters<typeof setFilters>[0]) => void setFilters({ limit: null, ...change });
  const isFiltered = (Object.keys(NONE) as (keyof typeof NONE)[]).some(
    (key) => key !== "limit" && filters[key] !== null,
  );
  return (
    <FilterForm
      label="Number, id or account"
      searched={filters.search}
      maxLength={64}
      onSearch={(search) => set({ search })}
      onClear={isFiltered ? () => void setFilters(NONE) : null}
    >
      <FilterChoice
        label="Concern"
        value={filters.concern}
        words={CONCERN_WORDS}
        onChange={(concern) => set({ concern })}
      />
      <FilterChoice
        label="State"
        value={filters.state}
        words={CASE_STATE_WORDS}
        codes={UNDECIDED_STATES}
        onChange={(state) => set({ state })}
      />
      <FilterChoice label="Zone" value={filters.zone} words={ZONE_WORDS} onChange={(zone) => set({ zone })} />
      <FilterChoice
        label="Channel"
        value={filters.channel}
        words={CHANNEL_WORDS}
        onChange={(channel) => set({ channel })}
      />
      <FilterChoice
        label="With"
        value={filters.person}
        words={{ nobody: "Nobody", ...Object.fromEntries(people.map(({ id, name }) => [id, name])) }}
        onChange={(person) => set({ person })}
      />
    </FilterForm>
  );
}
