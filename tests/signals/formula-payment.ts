import { type FormulaPayment, scopeOf } from "@/lib/signals/formula-fields";
import { compileFormula, type Formula } from "@/lib/signals/own-formula";

export const examplePayment: FormulaPayment = {
  occurredAt: new Date("2026-06-17T18:30:00Z"),
  amountBaseMinor: 12_345,
  currency: "EUR",
  direction: "outgoing",
  channel: "card_remote",
  remote: 1,
  mcc: "5732",
  counterpartyCountry: "FR",
  accountCountry: "DE",
  authentication: "single",
  accountOpenedAt: new Date("2026-06-07T18:30:00Z"),
  upstreamScore: 0.75,
  ruleHits: ["velocity", "amount"],
  cardRef: "card-1",
  deviceId: null,
  attributes: { loyalty_years: 4, tier: "gold", verified: true, "basket size": 3 },
};

export function formulaOf(text: string): Formula {
  const { formula, problem } = compileFormula(text);
  if (!formula) throw new Error(`${text}: ${problem.message}`);
  return formula;
}

export const measure = (text: string, payment = examplePayment) => formulaOf(text).measure(scopeOf(payment));
