"use client";
import type { FormEvent, ReactNode } from "react";
import { Button } from "./button";
import { Field, Input, Select } from "./field";

type FilterFormProps = {
  /** What can be searched for. */
  label: string;
  searched: string | null;
  maxLength: number;
  /** Null where the field was left empty. */
  onSearch: (typed: string | null) => void;
  /** Null while nothing is filtered. */
  onClear: (() => void) | null;
  /** `FilterChoice`s. */
  children: ReactNode;
};

/** Search and filters of a list; a choice acts at once, a search when it is sent. */
export function FilterForm({ label, searched, maxLength, onSearch, onClear, children }: FilterFormProps) {
  const search = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const typed = String(new FormData(event.currentTarget).get("search") ?? "").trim();
    onSearch(typed || null);
  };
  return (
    <search>
      <form onSubmit={search} className="mb-4 flex flex-wrap items-end gap-3">
        <Field label={label} className="w-full sm:w-56">
          <Input
            key={searched}
            name="search"
            type="search"
            maxLength={maxLength}
            defaultValue={searched ?? ""}
          />
        </Field>
        {children}
        <Button type="submit">Search</Button>
        {onClear && (
          <Button look="quiet" onClick={onClear}>
            Clear
          </Button>
        )}
      </form>
    </search>
  );
}

type FilterChoiceProps<Code extends string> = {
  label: string;
  value: Code | null;
  words: Readonly<Record<Code, string>>;
  /** Those that can be chosen, where it is not all of them. */
  codes?: readonly Code[];
  /** Null for any. */
  onChange: (code: Code | null) => void;
};

export function FilterChoice<Code extends string>(props: FilterChoiceProps<Code>) {
  const { label, value, words, codes = Object.keys(words) as Code[], onChange } = props;
  return (
    <Field label={label} className="w-[calc(50%-0.375rem)] sm:w-40">
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
