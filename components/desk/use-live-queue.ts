"use client";
import { useEffect, useState } from "react";
import type { CaseState } from "@/lib/cases/codes";
import { apiPath } from "../api";

type LiveQueueProps = {
  paused: boolean;
  onQueue: (queue: { version: number; total: number }) => void;
  onCase: (changed: { caseId: string; state: CaseState }) => void;
  /** Opened, at first or again: what happened before may have been missed. */
  onOpen: () => void;
};

/** A stream that was refused outright is not opened again by the browser itself. */
const REOPEN_AFTER_MS = 10_000;

/** Others' work as it happens. @returns whether the stream is open now */
export function useLiveQueue({ paused, onQueue, onCase, onOpen }: LiveQueueProps): boolean {
  const [open, setOpen] = useState(false);
  const [attempt, setAttempt] = useState(0);
  useEffect(() => {
    if (paused) return;
    const stream = new EventSource(apiPath("GET /api/queue/events", {}));
    let again: ReturnType<typeof setTimeout> | undefined;
    stream.onopen = () => {
      setOpen(true);
      onOpen();
    };
    stream.onerror = () => {
      setOpen(false);
      if (stream.readyState === EventSource.CLOSED) {
        again = setTimeout(() => setAttempt(attempt + 1), REOPEN_AFTER_MS);
      }
    };
    stream.addEventListener("queue", (event) => onQueue(JSON.parse(event.data)));
    stream.addEventListener("case", (event) => onCase(JSON.parse(event.data)));
    return () => {
      clearTimeout(again);
      stream.close();
      setOpen(false);
    };
  }, [paused, onQueue, onCase, onOpen, attempt]);
  return open && !paused;
}
