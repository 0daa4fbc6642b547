"use client";
import type { inferParserType, UseQueryStatesReturn } from "nuqs";
import { UNDECIDED_STATES } from "@/lib/cases/codes";
import { FilterChoice, FilterForm } from "../ui/filter-form";
import { CASE_STATE_WORDS, CHANNEL_WORDS, ZONE_WORDS } from "../words";
import type { CASE_FILTERS } from "./filters";

type CaseFiltersProps = {
  filters: inferParserType<typeof CASE_FILTERS>;
  setFilters: UseQueryStatesReturn<typeof CASE_FILTERS>[1];
  filtered: boolean;
};

const ASSIGNEE_WORDS = { me: "Me", nobody: "Nobody" };

export function CaseFilters({ filters, setFilters, filtered }: CaseFiltersProps) {
  const set = (change: Parameters<typeof setFilters>[0]) => void setFilters(change);
  return (
    <FilterForm
      label="Number, reference or account"
      searched={filters.search}
      maxLength={64}
      onSearch={(search) => set({ search })}
      onClear={filtered ? () => set(null) : null}
    >
      <FilterChoice label="Zone" value={filters.zone} words={ZONE_WORDS} onChange={(zone) => set({ zone })} />
      <FilterChoice
        label="Channel"
        value={filters.channel}
        words={CHANNEL_WORDS}
        onChange={(channel) => set({ channel })}
      />
      <FilterChoice
        label="State"
        value={filters.state}
        words={CASE_STATE_WORDS}
        codes={UNDECIDED_STATES}
        onChange={(state) => set({ state })}
      />
      <FilterChoice
        label="With"
        value={filters.assignee}
        words={ASSIGNEE_WORDS}
        onChange={(assignee) => set({ assignee })}
      />
    </FilterForm>
  );
}
