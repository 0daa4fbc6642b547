"use client";
import { keepPreviousData, useInfiniteQuery } from "@tanstack/react-query";
import { useQueryStates } from "nuqs";
import type { ImportsView } from "@/lib/imports/schema";
import { api } from "../api";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Section } from "../ui/section";
import { Skeleton } from "../ui/skeleton";
import { IMPORT_FILTERS } from "./filters";
import { ImportFilters } from "./import-filters";
import { ImportTable } from "./import-table";
import { isUnfinished } from "./import-words";

const PAGE = 25;
/** Somebody else's upload shows without a reload, too. */
const EVERY_MS = { working: 1_500, resting: 20_000 };

/** All imports, the newest first; asked for again while one is unfinished. */
export function ImportsSection({ mayUpload }: { mayUpload: boolean }) {
  const [filters, setFilters] = useQueryStates(IMPORT_FILTERS, { history: "push" });
  const set = Object.entries(filters).filter(([, value]) => value !== null);
  const list = useInfiniteQuery({
    queryKey: ["imports", "list", filters],
    queryFn: ({ pageParam, signal }) => {
      const input = { limit: PAGE, ...Object.fromEntries(set), ...(pageParam && { cursor: pageParam }) };
      return api("GET /api/imports", input, { signal }) as Promise<ImportsView>;
    },
    initialPageParam: "",
    getNextPageParam: (page) => page.next,
    placeholderData: keepPreviousData,
    // Whoever comes back looks for what has happened meanwhile.
    refetchOnMount: "always",
    refetchInterval: ({ state }) => {
      const shown = state.data?.pages.flatMap((page) => page.items) ?? [];
      return shown.some(isUnfinished) ? EVERY_MS.working : EVERY_MS.resting;
    },
  });
  const items = list.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <Section title="Files" lead="The newest first. Each leads to its counts and its rejected rows.">
      <ImportFilters filters={filters} setFilters={setFilters} />
      {list.error && (
        <Notice kind="error" title="The list could not be brought up to date" className="mb-4">
          {list.error.message}{" "}
          <Button look="quiet" small className="px-0" onClick={() => void list.refetch()}>
            Try again
          </Button>
        </Notice>
      )}
      {list.isPending ? (
        <>
          <p className="sr-only" role="status">
            Loading
          </p>
          <Skeleton lines={5} className="h-8" />
        </>
      ) : items.length === 0 && !list.error ? (
        <EmptyState title={set.length > 0 ? "No file fits these filters" : "No file has come in yet"}>
          {set.length > 0
            ? "Take a filter away, or search for another name."
            : mayUpload
              ? "Send one above."
              : "A supervisor can send one."}
        </EmptyState>
      ) : (
        <div className={list.isPlaceholderData ? "opacity-60" : ""}>
          <ImportTable items={items} />
          {list.hasNextPage && (
            <Button className="mt-3" busy={list.isFetchingNextPage} onClick={() => void list.fetchNextPage()}>
              Show older files
            </Button>
          )}
        </div>
      )}
    </Section>
  );
}
