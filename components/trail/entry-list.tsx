"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { TrailView } from "@/lib/trail/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { EntryTable } from "./entry-table";

type SentFilters = Omit<Parameters<typeof api<"GET /api/trail">>[1], "cursor" | "limit">;

type EntryListProps = { first: TrailView; filters: SentFilters };

/** The newest entries, and older ones on request; paging on is part of the same search. */
export function EntryList({ first, filters }: EntryListProps) {
  const [older, setOlder] = useState<TrailView[]>([]);
  const { next } = older.at(-1) ?? first;
  const more = useMutation<TrailView | null, ApiProblem, string>({
    mutationFn: (cursor) => api("GET /api/trail", { ...filters, cursor }),
    onSuccess: (page) => page && setOlder((pages) => [...pages, page]),
  });
  const items = [first, ...older].flatMap((page) => page.items);
  if (items.length === 0) {
    return <EmptyState title="No entries">Nothing in the trail fits this search.</EmptyState>;
  }
  return (
    <>
      <EntryTable caption="Entries of the trail, newest first" entries={items} />
      <div className="mt-3 flex flex-col items-start gap-2">
        {more.error && <Notice kind="error">{more.error.message}</Notice>}
        {next === null ? (
          <p className="text-small text-soft">That is all of them.</p>
        ) : (
          <Button busy={more.isPending} onClick={() => more.mutate(next)}>
            Show older entries
          </Button>
        )}
      </div>
    </>
  );
}
