"use client";
import type { inferParserType, UseQueryStatesReturn } from "nuqs";
import type { FormEvent } from "react";
import { IMPORT_STATES } from "@/lib/transactions/codes";
import { Button } from "../ui/button";
import { Field, Input, Select } from "../ui/field";
import { IMPORT_FILTERS } from "./filters";
import { IMPORT_STATE_WORDS } from "./import-words";

type ImportFiltersProps = {
  filters: inferParserType<typeof IMPORT_FILTERS>;
  setFilters: UseQueryStatesReturn<typeof IMPORT_FILTERS>[1];
};

export function ImportFilters({ filters, setFilters }: ImportFiltersProps) {
  const isFiltered = filters.search !== null || filters.state !== null;
  const search = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const typed = String(new FormData(event.currentTarget).get("search") ?? "").trim();
    void setFilters({ search: typed || null });
  };
  return (
    <search>
      <form onSubmit={search} className="mb-4 flex flex-wrap items-end gap-3">
        <Field label="File name" className="w-56">
          <Input
            key={filters.search}
            name="search"
            type="search"
            maxLength={255}
            defaultValue={filters.search ?? ""}
          />
        </Field>
        <Field label="State" className="w-48">
          <Select
            value={filters.state ?? ""}
            onChange={(event) => void setFilters({ state: IMPORT_FILTERS.state.parse(event.target.value) })}
          >
            <option value="">Any</option>
            {IMPORT_STATES.map((state) => (
              <option key={state} value={state}>
                {IMPORT_STATE_WORDS[state]}
              </option>
            ))}
          </Select>
        </Field>
        <Button type="submit">Search</Button>
        {isFiltered && (
          <Button look="quiet" onClick={() => void setFilters({ search: null, state: null })}>
            Clear
          </Button>
        )}
      </form>
    </search>
  );
}
