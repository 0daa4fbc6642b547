import type { PolicyTerms } from "@/lib/policy/schema";
import { CHANNELS } from "@/lib/transactions/codes";
import { type Currency, decimal, leafAt, minorToText } from "./term-values";
import {
  REVIEW_CASES,
  REVIEW_KIND,
  REVIEW_PROBABILITY,
  TERM_GROUPS,
  type Term,
  type TermKind,
} from "./terms";

/** What stands in the form, by the path of each term, exactly as typed. */
export type Draft = Readonly<Record<string, string>>;

const FORM_TERMS: readonly Term[] = TERM_GROUPS.flatMap(({ terms }) => terms);
const CHANNEL_RULES = ["onHold", "holdMinutes", "atExpiry"] as const;
/** What the field of the other kind of review threshold starts from. */
const STARTING = { [REVIEW_CASES.path]: "100", [REVIEW_PROBABILITY.path]: "20" };

export function draftOf(terms: PolicyTerms, currency: Currency): Draft {
  const draft: Record<string, string> = { ...STARTING };
  for (const { path, kind } of FORM_TERMS) {
    const value = leafAt(terms, path);
    if (value !== undefined) draft[path] = toText(value, kind, currency);
  }
  for (const channel of CHANNELS) {
    for (const rule of CHANNEL_RULES) {
      draft[`channels.${channel}.${rule}`] = String(terms.channels[channel][rule]);
    }
  }
  return draft;
}

function toText(value: string | number | boolean, kind: TermKind, currency: Currency): string {
  if (typeof value !== "number") return String(value);
  if (kind === "percent") return decimal(value * 100);
  return kind === "money" ? minorToText(value, currency.minorDigits) : String(value);
}

/** What a draft stands for, and the paths whose text is no number; with any of those there are no terms. */
export type Reading = { terms: PolicyTerms | null; unreadable: readonly string[] };

/** Reads the form. Ranges and what fits with what are the server's to judge. */
export function readDraft(draft: Draft, currency: Currency): Reading {
  const built: Record<string, unknown> = {};
  const unreadable: string[] = [];
  const take = (path: string, kind: TermKind) => {
    const value = fromText(draft[path] ?? "", kind, currency);
    if (value === null) unreadable.push(path);
    else put(built, path, value);
  };
  for (const term of FORM_TERMS) if (isUsed(term, draft)) take(term.path, term.kind);
  for (const channel of CHANNELS) {
    for (const rule of CHANNEL_RULES) {
      take(`channels.${channel}.${rule}`, rule === "holdMinutes" ? "minutes" : "choice");
    }
  }
  return { terms: isWhole(built, unreadable) ? built : null, unreadable };
}

/** Every path of the terms is in the form, so what could be read everywhere is whole. */
function isWhole(
  built: Record<string, unknown> | PolicyTerms,
  unreadable: readonly string[],
): built is PolicyTerms {
  return unreadable.length === 0;
}

/** Of the two numbers of a review threshold, only the one of the chosen kind counts. */
export function isUsed({ path }: Term, draft: Draft): boolean {
  const kind = draft[REVIEW_KIND.path];
  if (path === REVIEW_CASES.path) return kind === "capacity";
  return path !== REVIEW_PROBABILITY.path || kind === "fixed";
}

/** Null where a number is wanted and none is there. */
function fromText(text: string, kind: TermKind, currency: Currency): string | number | boolean | null {
  if (kind === "choice") return text;
  if (kind === "flag") return text === "true";
  const typed = text.trim().replace(",", ".");
  const value = Number(typed);
  if (typed === "" || !Number.isFinite(value)) return null;
  if (kind === "percent") return Number((value / 100).toPrecision(12));
  return kind === "money" ? Number((value * 10 ** currency.minorDigits).toPrecision(15)) : value;
}

function put(target: Record<string, unknown>, path: string, value: unknown): void {
  const keys = path.split(".");
  const last = keys.pop() as string;
  let inner = target;
  for (const key of keys) {
    inner[key] ??= {};
    inner = inner[key] as Record<string, unknown>;
  }
  inner[last] = value;
}
