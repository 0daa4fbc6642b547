"use client";
import { keepPreviousData, useQuery, useQueryClient } from "@tanstack/react-query";
import { useCallback } from "react";
import type { ApprovalsView } from "@/lib/approvals/schema";
import type { DriftView } from "@/lib/learning/drift-schema";
import type { InfluenceView } from "@/lib/learning/influence-schema";
import type { LearningInput, LearningView } from "@/lib/learning/learning-schema";
import type { PassedView } from "@/lib/learning/passed-schema";
import type { SignalsView } from "@/lib/signals/own-schema";
import { type ApiProblem, api } from "../api";

/** Everything on the screen stands under it, so that one act can renew all of it. */
const LEARNING = "learning";
const REFRESH_MS = 60_000;

type FirstPaint = { view: LearningView; approvals: ApprovalsView; asked: LearningInput };

/** The comparison over a window of labels; the first one was read by the server. */
export function useComparison(asked: LearningInput, first: FirstPaint) {
  const { from, to } = asked;
  return useQuery<LearningView, ApiProblem>({
    queryKey: [LEARNING, "comparison", from ?? null, to ?? null],
    queryFn: ({ signal }) => answer(api("GET /api/learning", { from, to }, { signal })),
    ...(from === first.asked.from && to === first.asked.to && { initialData: first.view }),
    placeholderData: keepPreviousData,
    refetchInterval: REFRESH_MS,
  });
}

export function useApprovals(first: FirstPaint) {
  return useQuery<ApprovalsView, ApiProblem>({
    queryKey: [LEARNING, "approvals"],
    queryFn: ({ signal }) => answer(api("GET /api/approvals", {}, { signal })),
    initialData: first.approvals,
    refetchInterval: REFRESH_MS,
  });
}

/** After an act: asks for everything on the screen anew. */
export function useRenewal(): () => void {
  const client = useQueryClient();
  return useCallback(() => void client.invalidateQueries({ queryKey: [LEARNING] }), [client]);
}

/** These routes always answer with a view. */
async function answer<View>(call: Promise<View | null>): Promise<View> {
  const view = await call;
  if (view === null) throw new Error("The server answered with nothing");
  return view;
}

/** Read after the first paint: each is a question of its own to the server. */
export function useDrift() {
  return useQuery<DriftView, ApiProblem>({
    queryKey: [LEARNING, "drift"],
    queryFn: ({ signal }) => answer(api("GET /api/learning/drift", {}, { signal })),
    refetchInterval: REFRESH_MS,
  });
}

export function usePassed() {
  return useQuery<PassedView, ApiProblem>({
    queryKey: [LEARNING, "passed"],
    queryFn: ({ signal }) => answer(api("GET /api/learning/passed", {}, { signal })),
    refetchInterval: REFRESH_MS,
  });
}

const RECKONING_MS = 5_000;

/** Asked for more often while effects are being reckoned. */
export function useInfluence() {
  return useQuery<InfluenceView, ApiProblem>({
    queryKey: [LEARNING, "influence"],
    queryFn: ({ signal }) => answer(api("GET /api/learning/influence", {}, { signal })),
    refetchInterval: ({ state }) => (state.data?.state === "pending" ? RECKONING_MS : REFRESH_MS),
  });
}

/** For what own signals are called in proposals about them; not asked for while there are none. */
export function useSignals(enabled: boolean) {
  return useQuery<SignalsView, ApiProblem>({
    queryKey: [LEARNING, "signals"],
    queryFn: ({ signal }) => answer(api("GET /api/signals", {}, { signal })),
    enabled,
  });
}
