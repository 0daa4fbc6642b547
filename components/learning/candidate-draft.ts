import type { CandidateInput } from "@/lib/learning/learning-schema";
import type { Method } from "@/lib/scorer";
import { OPTION_WORDS, type OptionKey } from "./method-words";

/** Methods that can run beside the one in use: a leader would have to keep every label. */
export const CANDIDATE_METHODS = [
  "improper",
  "implicit",
  "newton",
  "gradient",
  "aggregate",
] as const satisfies readonly Method[];
export type CandidateMethod = (typeof CANDIDATE_METHODS)[number];

/** Options of a method beside the two bounds that all have, with what is taken where a field is left empty. */
const OWN_DEFAULTS: Readonly<Record<CandidateMethod, Partial<Record<OptionKey, string>>>> = {
  improper: { regularization: "0.5", marginBound: "6", outcomeWeight: "0.5", forgetting: "1" },
  implicit: { regularization: "0.5", forgetting: "1" },
  newton: { regularization: "1" },
  gradient: {},
  aggregate: {},
};
const BOUNDS = { weightBound: "16", featureBound: "4" } as const;

/** What a field takes, as the scorer demands it. */
export const OPTION_RANGES: Readonly<Record<OptionKey, string>> = {
  regularization: "Above 0",
  weightBound: "Above 0",
  featureBound: "Above 0",
  marginBound: "Above 0",
  outcomeWeight: "0.5 or 1",
  forgetting: "Above 0, at most 1",
};

export type OptionField = { key: OptionKey; initial: string };

export function optionFields(method: CandidateMethod): OptionField[] {
  const initials = { ...OWN_DEFAULTS[method], ...BOUNDS };
  return (Object.keys(OPTION_WORDS) as OptionKey[]).flatMap((key) => {
    const initial = initials[key];
    return initial === undefined ? [] : [{ key, initial }];
  });
}

/** What stands in the form, exactly as typed. */
export type OptionDraft = Readonly<Partial<Record<OptionKey, string>>>;

/** Reads the form; what is no number is named. Ranges are the server's to judge. */
export function readOptions(
  method: CandidateMethod,
  draft: OptionDraft,
): { options: NonNullable<CandidateInput["options"]>; unreadable: readonly OptionKey[] } {
  const options: NonNullable<CandidateInput["options"]> = {};
  const unreadable: OptionKey[] = [];
  for (const { key } of optionFields(method)) {
    const typed = (draft[key] ?? "").trim().replace(",", ".");
    const value = Number(typed);
    if (typed === "") continue;
    if (Number.isFinite(value)) options[key] = value;
    else unreadable.push(key);
  }
  return { options, unreadable };
}
