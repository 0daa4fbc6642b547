"use client";
import { TZDate } from "@date-fns/tz";
import { format } from "date-fns";
import { createContext, useContext } from "react";

const ZoneContext = createContext("UTC");

/** The signed-in person's IANA time zone, for every Time beneath. */
export const ZoneProvider = ZoneContext.Provider;
export const useZone = () => useContext(ZoneContext);

const PATTERNS = {
  minute: "d MMM yyyy, HH:mm",
  second: "d MMM yyyy, HH:mm:ss",
  day: "d MMM yyyy",
  clock: "HH:mm",
  short: "d MMM, HH:mm",
} as const;

type TimeProps = { at: string; as?: keyof typeof PATTERNS };

/** An instant in the person's zone, the UTC beside it on hover. */
export function Time({ at, as: shape = "minute" }: TimeProps) {
  const zone = useZone();
  const utc = `${format(new TZDate(at, "UTC"), PATTERNS.second)} UTC`;
  return (
    <time dateTime={at} title={utc} className="whitespace-nowrap tabular-nums">
      {format(new TZDate(at, zone), PATTERNS[shape])}
    </time>
  );
}
