"use client";
import { keepPreviousData, useInfiniteQuery, useQuery } from "@tanstack/react-query";
import { useQueryStates } from "nuqs";
import type { QueueView, RugView } from "@/lib/cases/schema";
import { api } from "../api";
import { Button } from "../ui/button";
import { countText } from "../ui/count";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Skeleton } from "../ui/skeleton";
import { CaseFilters } from "./case-filters";
import { CaseTable } from "./case-table";
import { CASE_FILTERS } from "./filters";

const PAGE = 100;

/** Waiting cases in the policy's order, with the filters in the address. */
export function CasesScreen() {
  const [filters, setFilters] = useQueryStates(CASE_FILTERS, { history: "push" });
  const set = Object.entries(filters).filter(([, value]) => value !== null);
  const list = useInfiniteQuery({
    queryKey: ["queue", "cases", filters],
    queryFn: ({ pageParam, signal }) => {
      const input = { limit: PAGE, ...Object.fromEntries(set), ...(pageParam && { cursor: pageParam }) };
      return api("GET /api/queue", input, { signal }) as Promise<QueueView>;
    },
    initialPageParam: "",
    getNextPageParam: (page) => page.next,
    placeholderData: keepPreviousData,
  });
  const lines = useQuery({
    queryKey: ["queue", "lines"],
    queryFn: ({ signal }) => api("GET /api/queue/rug", {}, { signal }) as Promise<RugView>,
    staleTime: 60_000,
  });
  const items = list.data?.pages.flatMap((page) => page.items) ?? [];
  const total = list.data?.pages[0]?.total ?? 0;
  return (
    <>
      <CaseFilters filters={filters} setFilters={setFilters} filtered={set.length > 0} />
      {list.error && (
        <Notice kind="error" title="The list did not load" className="mb-4">
          {list.error.message}{" "}
          <Button look="quiet" small className="px-0" onClick={() => void list.refetch()}>
            Try again
          </Button>
        </Notice>
      )}
      {list.isPending ? (
        <Skeleton lines={12} className="h-7" />
      ) : items.length === 0 && !list.error ? (
        <EmptyState title={set.length > 0 ? "No waiting case fits these filters" : "Nothing waits"}>
          {set.length > 0
            ? "Take a filter away, or search for another number."
            : "New cases appear here as they come in."}
        </EmptyState>
      ) : (
        <div className={list.isPlaceholderData ? "opacity-60" : ""}>
          <CaseTable items={items} total={total} lines={lines.data ?? null} />
          <p role="status" className="mt-3 flex items-center gap-4 text-small text-soft">
            {countText(items.length)} of {countText(total)}
            {list.hasNextPage && (
              <Button small busy={list.isFetchingNextPage} onClick={() => void list.fetchNextPage()}>
                Show {PAGE} more
              </Button>
            )}
          </p>
        </div>
      )}
    </>
  );
}
