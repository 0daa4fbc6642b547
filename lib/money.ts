import { code as currencyByCode } from "currency-codes";

/** Gold, test and fund codes of ISO 4217 have no minor unit: nobody pays with them. */
const WITHOUT_MINOR_UNIT = new Set([
  "XAG",
  "XAU",
  "XBA",
  "XBB",
  "XBC",
  "XBD",
  "XDR",
  "XPD",
  "XPT",
  "XSU",
  "XTS",
  "XUA",
  "XXX",
]);

/** Decimal places of a currency's minor unit (ISO 4217); null where the code is unknown or has none. */
export function minorDigits(currency: string): number | null {
  if (!/^[A-Z]{3}$/.test(currency) || WITHOUT_MINOR_UNIT.has(currency)) return null;
  return currencyByCode(currency)?.digits ?? null;
}

/**
 * A decimal string in minor units: `"129.90"` EUR → 12990, `"500"` JPY → 500, `"1.234"` KWD → 1234.
 * Null where it is not a plain decimal number, has more places than the currency, or passes 2^53 − 1.
 */
export function parseAmount(text: string, currency: string): number | null {
  const digits = minorDigits(currency);
  const match = /^(\d{1,16})(?:\.(\d{1,4}))?$/.exec(text);
  if (digits === null || !match) return null;
  const fraction = match[2] ?? "";
  if (fraction.length > digits) return null;
  const minor = Number(`${match[1]}${fraction.padEnd(digits, "0")}`);
  return Number.isSafeInteger(minor) ? minor : null;
}

/** Minor units as the decimal string of the API: 12990 EUR → `"129.90"`; negative amounts carry a hyphen. */
export function formatAmount(minor: number | bigint, currency: string): string {
  const digits = minorDigits(currency) ?? 2;
  const sign = minor < 0 ? "-" : "";
  const text = String(minor < 0 ? -minor : minor).padStart(digits + 1, "0");
  return digits === 0 ? sign + text : `${sign}${text.slice(0, -digits)}.${text.slice(-digits)}`;
}

/** A decimal string of the API with thin spaces between its groups of three and a minus sign, for people. */
export function groupDigits(amount: string): string {
  const [whole = "", fraction] = amount.split(".");
  const grouped = whole.replace(/\B(?=(\d{3})+(?!\d))/g, "\u202f").replace(/^-/, "−");
  return fraction === undefined ? grouped : `${grouped}.${fraction}`;
}
