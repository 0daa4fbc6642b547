"use client";
import { keepPreviousData, useQuery } from "@tanstack/react-query";
import { useEffect, useState } from "react";
import type { SignalPreview } from "@/lib/signals/own-schema";
import { type ApiProblem, api } from "../api";

const PAUSE_MS = 350;

export type PreviewWish = { formula: string; middle: number | null; reach: number | null };

/** What the formula measures, asked for once one pauses in typing. */
export function usePreview(wish: PreviewWish) {
  const text = JSON.stringify(wish);
  const [settled, setSettled] = useState(text);
  useEffect(() => {
    const timer = setTimeout(() => setSettled(text), PAUSE_MS);
    return () => clearTimeout(timer);
  }, [text]);
  const asked = JSON.parse(settled) as PreviewWish;
  const query = useQuery<SignalPreview | null, ApiProblem>({
    queryKey: ["signal-preview", settled],
    queryFn: ({ signal }) => api("GET /api/signals/preview", inputOf(asked), { signal }),
    enabled: asked.formula.trim() !== "",
    placeholderData: keepPreviousData,
    staleTime: 10_000,
    retry: false,
  });
  const isBlank = wish.formula.trim() === "";
  return {
    preview: isBlank ? null : (query.data ?? null),
    error: isBlank ? null : query.error,
    /** What is shown is not of what stands in the form yet. */
    isBehind: !isBlank && (settled !== text || query.isFetching),
  };
}

function inputOf({ formula, middle, reach }: PreviewWish) {
  return middle === null || reach === null ? { formula } : { formula, middle, reach };
}
