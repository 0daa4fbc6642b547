"use client";
import { useEffect, useState } from "react";

/** PCI DSS 8.2.8 names fifteen minutes; the server ends the session after as long. */
export const IDLE_MINUTES = 15;
const KEPT_AT = "cupel.active-at";
const SIGNS = ["pointerdown", "keydown", "wheel", "touchstart"] as const;
/** Activity is noted no more often than this. */
const NOTE_EVERY_MS = 5_000;

/** When the person last touched Cupel in any tab of this browser. */
export function lastActiveMs(): number {
  return Number(localStorage.getItem(KEPT_AT) ?? 0);
}

function noteActivity(): void {
  localStorage.setItem(KEPT_AT, String(Date.now()));
}

/** True once nobody has touched Cupel for so long; `onActive` hears of every sign of life, at most every few seconds. */
export function useIdle(minutes: number, onActive: () => void): [idle: boolean, wake: () => void] {
  const [idle, setIdle] = useState(false);
  useEffect(() => {
    noteActivity();
    const sign = () => {
      if (isIdle(minutes) || Date.now() - lastActiveMs() < NOTE_EVERY_MS) return;
      noteActivity();
      onActive();
    };
    // A machine that slept wakes with its timers late, so the clock is asked each time.
    const timer = setInterval(() => setIdle(isIdle(minutes)), 5_000);
    for (const name of SIGNS) window.addEventListener(name, sign, { passive: true, capture: true });
    return () => {
      clearInterval(timer);
      for (const name of SIGNS) window.removeEventListener(name, sign, { capture: true });
    };
  }, [minutes, onActive]);
  const wake = () => {
    noteActivity();
    setIdle(false);
  };
  return [idle, wake];
}

function isIdle(minutes: number): boolean {
  return Date.now() - lastActiveMs() >= minutes * 60_000;
}
