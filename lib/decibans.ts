/** Decibans in one nat of log-odds: 10·log10(e). Unit of I. J. Good, Probability and the Weighing of Evidence, 1950. */
const DECIBANS_PER_NAT = 10 / Math.LN10;

export const natsToDecibans = (nats: number): number => nats * DECIBANS_PER_NAT;
export const decibansToNats = (decibans: number): number => decibans / DECIBANS_PER_NAT;

/** Log-odds of a probability, in nats. */
export const logitOf = (probability: number): number => Math.log(probability) - Math.log1p(-probability);

/** Probability of a log-odds in nats; safe at both ends. */
export function probabilityOf(logit: number): number {
  if (logit >= 0) return 1 / (1 + Math.exp(-logit));
  const odds = Math.exp(logit);
  return odds / (1 + odds);
}
