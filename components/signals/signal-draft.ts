import type { OwnSignalView } from "@/lib/signals/own-schema";

/** The form's texts as they are typed. */
export type SignalDraft = { name: string; sentence: string; formula: string; middle: string; reach: string };

export const EMPTY_DRAFT: SignalDraft = { name: "", sentence: "", formula: "", middle: "", reach: "" };

export function draftOfSignal({ name, sentence, formula, middle, reach }: OwnSignalView): SignalDraft {
  return { name, sentence, formula, middle: String(middle), reach: String(reach) };
}

/** Null where no number stands; a comma may stand for the point, and any minus is one. */
export function readNumber(text: string): number | null {
  const plain = text.trim().replace(",", ".").replace("−", "-");
  if (!/^-?\d+(\.\d*)?(e[+-]?\d+)?$/i.test(plain)) return null;
  const value = Number(plain);
  return Number.isFinite(value) ? value : null;
}
