"use client";
import { keepPreviousData, useInfiniteQuery, useQuery } from "@tanstack/react-query";
import { useCallback, useEffect, useMemo, useRef, useState } from "react";
import type { CaseState } from "@/lib/cases/codes";
import type { QueueItem, QueueView, RugView } from "@/lib/cases/schema";
import { api } from "../api";

const PAGE = 200;

export type RankedList = {
  items: readonly QueueItem[];
  /** Grows with every new picture. */
  picture: number;
  total: number;
  loading: boolean;
  failed: Error | null;
  /** The server's order is another by now; it is shown at the next move or when asked for. */
  orderChanged: boolean;
  showNewOrder: () => void;
  /** At a move of the person's own: shows the new order unless they are in the list just now. */
  afterMove: () => void;
  /** Pointer or focus is in the list, so it must stay as it is. */
  setBusy: (busy: boolean) => void;
  loadMore: () => void;
  noteQueue: (queue: { version: number; total: number }) => void;
  /** Marks a row in its place: who holds it changed, its rank did not. */
  noteCase: (changed: { caseId: string; state: CaseState }) => void;
};

/** The ranked list as this person sees it: a still picture of the server's order, renewed only when they move. */
export function useRankedList(): RankedList {
  const [picture, setPicture] = useState(0);
  const [heard, setHeard] = useState<{ version: number; total: number; atMs: number } | null>(null);
  const [states, setStates] = useState<Readonly<Record<string, CaseState>>>({});
  const busy = useRef(false);
  const query = useInfiniteQuery({
    queryKey: ["queue", "ranked", picture],
    queryFn: ({ pageParam, signal }) => loadPage(pageParam, signal),
    initialPageParam: "",
    getNextPageParam: (page) => page.next,
    placeholderData: keepPreviousData,
    staleTime: Number.POSITIVE_INFINITY,
    gcTime: 0,
    refetchOnWindowFocus: false,
    refetchOnReconnect: false,
  });
  const { data, hasNextPage, isFetching, fetchNextPage } = query;
  const items = useMemo(() => withStates(data?.pages ?? [], states), [data, states]);
  const shown = data?.pages[0];
  // What was heard before the picture was taken is in the picture.
  const news = shown && heard && heard.atMs > query.dataUpdatedAt ? heard : null;
  const showNewOrder = useCallback(() => {
    setStates({});
    setPicture((number) => number + 1);
  }, []);
  return {
    items,
    picture,
    total: news?.total ?? shown?.total ?? 0,
    loading: query.isPending,
    failed: query.error,
    orderChanged: news !== null && (news.version !== shown?.version || news.total !== shown.total),
    showNewOrder,
    afterMove: useCallback(() => {
      if (!busy.current) showNewOrder();
    }, [showNewOrder]),
    setBusy: useCallback((now: boolean) => {
      busy.current = now;
    }, []),
    loadMore: useCallback(() => {
      if (hasNextPage && !isFetching) void fetchNextPage();
    }, [hasNextPage, isFetching, fetchNextPage]),
    noteQueue: useCallback((queue) => setHeard({ ...queue, atMs: Date.now() }), []),
    noteCase: useCallback(({ caseId, state }) => setStates((all) => ({ ...all, [caseId]: state })), []),
  };
}

async function loadPage(cursor: string, signal: AbortSignal): Promise<QueueView> {
  const page = await api("GET /api/queue", { limit: PAGE, ...(cursor && { cursor }) }, { signal });
  return page as QueueView;
}

function withStates(pages: readonly QueueView[], states: Readonly<Record<string, CaseState>>): QueueItem[] {
  return pages.flatMap((page) =>
    page.items.map((item) => {
      const state = states[item.caseId];
      return state && state !== item.state ? { ...item, state, claimedBy: null } : item;
    }),
  );
}

const RUG_EVERY_MS = 15_000;

/** Evidence of every waiting case for the axis: now and then, and while paused at the person's own moves only. */
export function useRug({ picture }: RankedList, paused: boolean): RugView | null {
  const { data, dataUpdatedAt, refetch } = useQuery({
    queryKey: ["queue", "rug"],
    queryFn: ({ signal }) => api("GET /api/queue/rug", {}, { signal }) as Promise<RugView>,
    refetchInterval: paused ? false : RUG_EVERY_MS,
    refetchOnWindowFocus: false,
  });
  const takenAt = useRef(0);
  useEffect(() => {
    takenAt.current = dataUpdatedAt;
  }, [dataUpdatedAt]);
  useEffect(() => {
    // The first picture comes with the first rug.
    if (picture > 0 && Date.now() - takenAt.current > RUG_EVERY_MS) void refetch();
  }, [picture, refetch]);
  return data ?? null;
}
