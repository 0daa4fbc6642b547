"use client";
import type { inferParserType, UseQueryStatesReturn } from "nuqs";
import { FilterChoice, FilterForm } from "../ui/filter-form";
import type { IMPORT_FILTERS } from "./filters";
import { IMPORT_STATE_WORDS } from "./import-words";

type ImportFiltersProps = {
  filters: inferParserType<typeof IMPORT_FILTERS>;
  setFilters: UseQueryStatesReturn<typeof IMPORT_FILTERS>[1];
};

export function ImportFilters({ filters, setFilters }: ImportFiltersProps) {
  const isFiltered = filters.search !== null || filters.state !== null;
  return (
    <FilterForm
      label="File name"
      searched={filters.search}
      maxLength={255}
      onSearch={(search) => void setFilters({ search })}
      onClear={isFiltered ? () => void setFilters({ search: null, state: null }) : null}
    >
      <FilterChoice
        label="State"
        value={filters.state}
        words={IMPORT_STATE_WORDS}
        onChange={(state) => void setFilters({ state })}
      />
    </FilterForm>
  );
}
