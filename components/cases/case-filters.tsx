"use client";
import type { inferParserType, UseQueryStatesReturn } from "nuqs";
import type { FormEvent, ReactNode } from "react";
import { UNDECIDED_STATES } from "@/lib/cases/codes";
import { ZONES } from "@/lib/policy/codes";
import { CHANNELS } from "@/lib/transactions/codes";
import { Button } from "../ui/button";
import { Field, Input, Select } from "../ui/field";
import { CASE_STATE_WORDS, CHANNEL_WORDS, ZONE_WORDS } from "../words";
import { CASE_FILTERS } from "./filters";

type CaseFiltersProps = {
  filters: inferParserType<typeof CASE_FILTERS>;
  setFilters: UseQueryStatesReturn<typeof CASE_FILTERS>[1];
  filtered: boolean;
};

const ASSIGNEE_WORDS = { me: "Me", nobody: "Nobody" } as const;

export function CaseFilters({ filters, setFilters, filtered }: CaseFiltersProps) {
  const search = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const typed = String(new FormData(event.currentTarget).get("search") ?? "").trim();
    void setFilters({ search: typed || null });
  };
  return (
    <search>
      <form onSubmit={search} className="mb-5 flex flex-wrap items-end gap-3">
        <Field label="Number, reference or account" className="w-full sm:w-56">
          <Input
            key={filters.search}
            name="search"
            type="search"
            maxLength={64}
            defaultValue={filters.search ?? ""}
          />
        </Field>
        <Pick
          label="Zone"
          value={filters.zone}
          onPick={(zone) => void setFilters({ zone: CASE_FILTERS.zone.parse(zone) })}
        >
          {ZONES.map((zone) => (
            <option key={zone} value={zone}>
              {ZONE_WORDS[zone]}
            </option>
          ))}
        </Pick>
        <Pick
          label="Channel"
          value={filters.channel}
          onPick={(channel) => void setFilters({ channel: CASE_FILTERS.channel.parse(channel) })}
        >
          {CHANNELS.map((channel) => (
            <option key={channel} value={channel}>
              {CHANNEL_WORDS[channel]}
            </option>
          ))}
        </Pick>
        <Pick
          label="State"
          value={filters.state}
          onPick={(state) => void setFilters({ state: CASE_FILTERS.state.parse(state) })}
        >
          {UNDECIDED_STATES.map((state) => (
            <option key={state} value={state}>
              {CASE_STATE_WORDS[state]}
            </option>
          ))}
        </Pick>
        <Pick
          label="With"
          value={filters.assignee}
          onPick={(assignee) => void setFilters({ assignee: CASE_FILTERS.assignee.parse(assignee) })}
        >
          {Object.entries(ASSIGNEE_WORDS).map(([value, words]) => (
            <option key={value} value={value}>
              {words}
            </option>
          ))}
        </Pick>
        <Button type="submit">Search</Button>
        {filtered && (
          <Button look="quiet" onClick={() => void setFilters(null)}>
            Clear
          </Button>
        )}
      </form>
    </search>
  );
}

type PickProps = {
  label: string;
  value: string | null;
  onPick: (value: string) => void;
  children: ReactNode;
};

function Pick({ label, value, onPick, children }: PickProps) {
  return (
    <Field label={label} className="w-[calc(50%-0.375rem)] sm:w-40">
      <Select value={value ?? ""} onChange={(event) => onPick(event.target.value)}>
        <option value="">Any</option>
        {children}
      </Select>
    </Field>
  );
}
