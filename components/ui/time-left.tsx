"use client";
import { useSyncExternalStore } from "react";
import { spanWords } from "./span-words";
import { Time } from "./time";

const TICK_MS = 15_000;

function everyTick(notify: () => void): () => void {
  const timer = setInterval(notify, TICK_MS);
  return () => clearInterval(timer);
}
const currentTick = () => Math.floor(Date.now() / TICK_MS) * TICK_MS;

/** The time now to a quarter of a minute, or null in the server's markup. */
export function useNowMs(): number | null {
  return useSyncExternalStore(everyTick, currentTick, () => null);
}

type TimeLeftProps = {
  until: string;
  /** Words before the span while it runs, and after it is over. */
  before: string;
  after: string;
  /** What is over is a moment past ("ended 3 h ago"), not a span that still grows ("overdue by 3 h"). */
  ago?: boolean;
};

/** "due in 2 h 05 min", "overdue by 3 h"; the moment itself on hover. */
export function TimeLeft({ until, before, after, ago = false }: TimeLeftProps) {
  const nowMs = useNowMs();
  if (nowMs === null) {
    return (
      <span>
        {before} <Time at={until} as="short" />
      </span>
    );
  }
  const leftMs = Date.parse(until) - nowMs;
  const over = leftMs < 0;
  return (
    <time
      dateTime={until}
      title={`${until.slice(0, 16).replace("T", " ")} UTC`}
      className={`whitespace-nowrap tabular-nums ${over ? "font-strong" : ""}`}
    >
      {over ? after : before} {spanWords(Math.abs(leftMs))}
      {over && ago && " ago"}
    </time>
  );
}
