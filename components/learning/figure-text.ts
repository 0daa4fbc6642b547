import { countText } from "../ui/count";

export const NOT_DEFINED = "not defined";

/** Nats in groups of three with so many places: 1234.56 → "1 234.6"; −0.04 → "0.0". */
export function natsText(nats: number, places = 1): string {
  const [whole = "", fraction] = Math.abs(nats).toFixed(places).split(".");
  const text = fraction === undefined ? whole : `${countText(Number(whole))}.${fraction}`;
  return nats < 0 && /[1-9]/.test(text) ? `−${text}` : text;
}

/** The same with its sign, for differences. */
export function signedNats(nats: number, places = 1): string {
  const text = natsText(nats, places);
  return nats > 0 && /[1-9]/.test(text) ? `+${text}` : text;
}

/** Loss for each label. */
export const lossText = (nats: number): string => natsText(nats, 4);

export const shareText = (share: number): string => share.toFixed(3);
export const brierText = (brier: number): string => brier.toFixed(4);

export const labelsText = (count: number): string => (count === 1 ? "1 label" : `${countText(count)} labels`);
