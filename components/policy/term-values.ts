import type { PolicyTerms } from "@/lib/policy/schema";
import { CHANNEL_WORDS } from "../words";
import { AT_EXPIRY_WORDS, ON_HOLD_WORDS, TERM_GROUPS, type Term } from "./terms";

export type Leaf = string | number | boolean;
export type Currency = { code: string; minorDigits: number };

/** The value at a path of the terms; undefined where these terms have none there. */
export function leafAt(terms: PolicyTerms, path: string): Leaf | undefined {
  let value: unknown = terms;
  for (const key of path.split(".")) {
    if (typeof value !== "object" || value === null) return undefined;
    value = (value as Record<string, unknown>)[key];
  }
  return typeof value === "object" || value === null ? undefined : (value as Leaf | undefined);
}

/** Decimal digits as people write them: 0.007 as a share is "0.7". */
export const decimal = (value: number): string => String(Number(value.toPrecision(12)));

export const minorToText = (minor: number, digits: number): string => (minor / 10 ** digits).toFixed(digits);

const TERMS = new Map(TERM_GROUPS.flatMap(({ terms }) => terms.map((term) => [term.path, term])));

/** The term at a path, channel rules included. */
export function termAt(path: string): Term {
  return TERMS.get(path) ?? channelTerm(path);
}

function channelTerm(path: string): Term {
  const [, channel = "", rule = ""] = path.split(".");
  const name = CHANNEL_WORDS[channel as keyof typeof CHANNEL_WORDS] ?? channel;
  const of = (label: string, rest: Pick<Term, "kind" | "words" | "unit">): Term => ({
    path,
    label: `${name}: ${label}`,
    hint: "",
    ...rest,
  });
  if (rule === "onHold") return of("above the hold line", { kind: "choice", words: ON_HOLD_WORDS });
  if (rule === "atExpiry") return of("when the hold ends", { kind: "choice", words: AT_EXPIRY_WORDS });
  return of("held for", { kind: "minutes", unit: "min" });
}

/** A term's value in words: "3 %", "24 h", "5.00 EUR", "By capacity". */
export function sayValue(term: Term, value: Leaf | null | undefined, currency: Currency): string {
  if (value === null || value === undefined) return "–";
  if (term.words) return term.words[String(value)] ?? String(value);
  if (typeof value !== "number") return String(value);
  switch (term.kind) {
    case "percent":
      return `${decimal(value * 100)} ${term.unit ?? "%"}`;
    case "money":
      return `${minorToText(value, currency.minorDigits)} ${currency.code}`;
    case "minutes":
      return sayMinutes(value);
    case "count":
      return term.unit?.startsWith("th ")
        ? `every ${ordinal(value)} ${term.unit.slice(3)}`
        : `${value} ${term.unit}`;
    default:
      return `${value} ${term.unit ?? ""}`.trim();
  }
}

function sayMinutes(minutes: number): string {
  if (minutes % (24 * 60) === 0) return minutes === 24 * 60 ? "24 h" : `${minutes / (24 * 60)} days`;
  if (minutes % 60 === 0) return `${minutes / 60} h`;
  return minutes > 60 ? `${Math.floor(minutes / 60)} h ${minutes % 60} min` : `${minutes} min`;
}

function ordinal(value: number): string {
  const tail = value % 100 >= 11 && value % 100 <= 13 ? 0 : value % 10;
  return `${value}${{ 1: "st", 2: "nd", 3: "rd" }[tail] ?? "th"}`;
}
