"use client";
import { useQueryStates } from "nuqs";
import { useTransition } from "react";
import { FILTERS } from "./filters";

/** Filters in the address; a change asks the server for the list anew. */
export function useFilters() {
  const [busy, startTransition] = useTransition();
  const [filters, setFilters] = useQueryStates(FILTERS, {
    shallow: false,
    history: "push",
    scroll: false,
    startTransition,
  });
  return { filters, setFilters, busy };
}

export type Filters = ReturnType<typeof useFilters>["filters"];
export type SetFilters = ReturnType<typeof useFilters>["setFilters"];
