"use client";
import { useState } from "react";
import type { Typology } from "@/lib/decisions/codes";
import type { Marker } from "./marker";

type Weighing = {
  caseId: string | null;
  marker: Marker;
  typology: Typology | null;
  ticked: ReadonlySet<string>;
};

const fresh = (caseId: string | null): Weighing => ({
  caseId,
  marker: "none",
  typology: null,
  ticked: new Set(),
});

/** Marker, typology and ticked links of the case in hand; whatever comes to hand finds them centred and empty. */
export function useFinding(caseId: string | null) {
  const [kept, setKept] = useState(() => fresh(caseId));
  const now = kept.caseId === caseId ? kept : fresh(caseId);
  // Also when a case comes back that was in hand before: Enter must not commit what was weighed then.
  if (now !== kept) setKept(now);
  const change = (part: Partial<Weighing>) => setKept({ ...now, ...part });
  return {
    marker: now.marker,
    typology: now.typology,
    ticked: now.ticked,
    setMarker: (marker: Marker) => change({ marker }),
    setTypology: (typology: Typology) => change({ typology }),
    tick: (transactionId: string, on: boolean) => {
      const ticked = new Set(now.ticked);
      if (on) ticked.add(transactionId);
      else ticked.delete(transactionId);
      change({ ticked });
    },
  };
}
