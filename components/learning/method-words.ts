import type { Method } from "@/lib/scorer";

/** What a method is called, and what it does, for somebody who chooses one. */
export const METHOD_WORDS: Readonly<Record<Method, { name: string; does: string }>> = {
  improper: {
    name: "Improper",
    does: "Weighs both possible answers before each one comes, so it stays near even odds until it has seen enough like the case. Says at any time how far from the best it can be at most.",
  },
  newton: {
    name: "Newton step",
    does: "Corrects each weight by how much is already known about it, within the bound on the weights.",
  },
  gradient: {
    name: "Gradient step",
    does: "Moves every weight a little against each mistake. The simplest and quickest; learns slowest.",
  },
  implicit: {
    name: "Implicit step",
    does: "Moves to where the new label would have been judged best. Strong in practice, without a guarantee.",
  },
  leader: {
    name: "Leader",
    does: "Fits all labels so far anew, every so many labels. Slower than the others, and a good yardstick for them.",
  },
  aggregate: {
    name: "Mixture of six",
    does: "Runs six scorers and gives each a say by how well it has predicted. Never far from the best of them, at six times the work.",
  },
};

/** What can be set on a method, in the order of the form. */
export const OPTION_WORDS = {
  regularization: {
    name: "Regularisation",
    does: "How strongly weights are drawn to zero at the start. More of it learns more slowly and errs less on rare signals.",
  },
  weightBound: {
    name: "Weight bound",
    does: "The weights together never get longer than this, whatever anybody labels.",
  },
  featureBound: {
    name: "Vector bound",
    does: "A payment with longer signals is scaled down to this length.",
  },
  marginBound: {
    name: "Margin bound",
    does: "The largest evidence in nats that the guarantee competes with. A smaller one learns faster.",
  },
  outcomeWeight: {
    name: "Weight of both answers",
    does: "How much the two possible answers of the case at hand count; 0.5, or 1 as published.",
  },
  forgetting: {
    name: "Memory",
    does: "Share of old experience that still counts after each label; 1 forgets nothing.",
  },
} as const;

export type OptionKey = keyof typeof OPTION_WORDS;
