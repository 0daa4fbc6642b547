"use client";
import type { FormEvent } from "react";
import { UNDECIDED_STATES } from "@/lib/cases/codes";
import type { FloorPerson } from "@/lib/floor/schema";
import { ZONES } from "@/lib/policy/codes";
import { CHANNELS } from "@/lib/transactions/codes";
import { Button } from "../ui/button";
import { Field, Input, Select } from "../ui/field";
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
  const search = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const typed = String(new FormData(event.currentTarget).get("search") ?? "").trim();
    set({ search: typed || null });
  };
  const isFiltered = (Object.keys(NONE) as (keyof typeof NONE)[]).some(
    (key) => key !== "limit" && filters[key] !== null,
  );
  return (
    <search>
      <form onSubmit={search} className="mb-4 flex flex-wrap items-end gap-3">
        <Field label="Number, id or account" className="w-52">
          <Input
            key={filters.search}
            name="search"
            type="search"
            maxLength={64}
            defaultValue={filters.search ?? ""}
          />
        </Field>
        <Choice
          label="Concern"
          value={filters.concern}
          words={CONCERN_WORDS}
          onChange={(concern) => set({ concern })}
        />
        <Choice
          label="State"
          value={filters.state}
          words={pick(CASE_STATE_WORDS, UNDECIDED_STATES)}
          onChange={(state) => set({ state })}
        />
        <Choice
          label="Zone"
          value={filters.zone}
          words={pick(ZONE_WORDS, ZONES)}
          onChange={(zone) => set({ zone })}
        />
        <Choice
          label="Channel"
          value={filters.channel}
          words={pick(CHANNEL_WORDS, CHANNELS)}
          onChange={(channel) => set({ channel })}
        />
        <Choice
          label="With"
          value={filters.person}
          words={{ nobody: "Nobody", ...Object.fromEntries(people.map(({ id, name }) => [id, name])) }}
          onChange={(person) => set({ person })}
        />
        <Button type="submit">Search</Button>
        {isFiltered && (
          <Button look="quiet" onClick={() => void setFilters(NONE)}>
            Clear
          </Button>
        )}
      </form>
    </search>
  );
}

type ChoiceProps<Code extends string> = {
  label: string;
  value: Code | null;
  words: Readonly<Record<Code, string>>;
  onChange: (code: Code | null) => void;
};

function Choice<Code extends string>({ label, value, words, onChange }: ChoiceProps<Code>) {
  const codes = Object.keys(words) as Code[];
  return (
    <Field label={label} className="w-40">
      <Select
        value={value ?? ""}
        onChange={(event) => onChange(codes.find((code) => code === event.target.value) ?? null)}
      >
        <option value="">Any</option>
        {codes.map((code) => (
          <option key={code} value={code}>
            {words[code]}
          </option>
        ))}
      </Select>
    </Field>
  );
}

function pick<Code extends string>(
  words: Readonly<Record<Code, string>>,
  codes: readonly Code[],
): Record<Code, string> {
  return Object.fromEntries(codes.map((code) => [code, words[code]])) as Record<Code, string>;
}
