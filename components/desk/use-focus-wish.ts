"use client";
import { type RefObject, useCallback, useRef } from "react";

export type FocusWish = {
  heading: RefObject<HTMLHeadingElement | null>;
  /** The next case that comes to hand is to have the focus: the person has just asked for it. */
  wish: () => void;
  /** Focus on the case in hand, now. */
  now: () => void;
  /** Called when a case has come to hand. */
  fulfil: () => void;
};

/** Moves the focus to a case only when the person's own act brought it, never because data arrived. */
export function useFocusWish(): FocusWish {
  const heading = useRef<HTMLHeadingElement>(null);
  const wished = useRef(true);
  const now = useCallback(() => heading.current?.focus({ preventScroll: true }), []);
  const wish = useCallback(() => {
    wished.current = true;
  }, []);
  const fulfil = useCallback(() => {
    if (!wished.current || !heading.current) return;
    wished.current = false;
    now();
  }, [now]);
  return { heading, wish, now, fulfil };
}
