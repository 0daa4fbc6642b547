"use client";
import { useEffect, useState } from "react";

type LayoutMap = ReadonlyMap<string, string>;
type WithKeyboard = Navigator & { keyboard?: { getLayoutMap?: () => Promise<LayoutMap> } };

/** What is printed on this person's keys, where the browser tells; null elsewhere and until it has. */
export function useKeyboardLayout(): LayoutMap | null {
  const [layout, setLayout] = useState<LayoutMap | null>(null);
  useEffect(() => {
    const keyboard = (navigator as WithKeyboard).keyboard;
    keyboard?.getLayoutMap?.().then(setLayout, () => {
      // Refused, as inside a frame: keys keep the names of their places.
    });
  }, []);
  return layout;
}
