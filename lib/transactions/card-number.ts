/** Lengths of a payment card's number (ISO/IEC 7812-1; 13 is the shortest in use). */
const SHORTEST = 13;
const LONGEST = 19;

/** Leading digits that the card schemes use: 2221–2720, 30, 34–39, 4, 50–58, 6. */
const LEADING = /^(?:4|5[0-8]|6|3[04-9]|2(?:22[1-9]|2[3-9]|[3-6]|7[01]|720))/;

/** A run of digits, whose groups may be set apart by spaces or dashes, as people write card numbers. */
const RUN = /\d+(?:[\s\p{Pd}]{1,3}\d+)*/gu;
const UUID = /^[0-9a-f]{8}(?:-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i;
/** Digits behind a decimal point are a measurement. */
const FRACTION = /^[+-]?(\d+)\.\d+$/;

/**
 * Whether a text holds what looks like a payment card's number: 13 to 19 digits with a card's leading digits that
 * pass the Luhn check (ISO/IEC 7812-1, Annex B). One in ten ordinary numbers of that length passes it too.
 */
export function holdsCardNumber(value: string | number): boolean {
  if (typeof value === "number") return Number.isInteger(value) && holdsCardNumber(BigInt(value).toString());
  if (value.length < SHORTEST || UUID.test(value)) return false;
  // Full-width and other digits are digits to whoever reads them.
  const text = (FRACTION.exec(value)?.[1] ?? value).normalize("NFKC");
  for (const [run] of text.matchAll(RUN)) {
    if (run.length >= SHORTEST && runHoldsCardNumber(run)) return true;
  }
  return false;
}

/** Whole groups next to each other are tried together; a longer unbroken number is no card number. */
function runHoldsCardNumber(run: string): boolean {
  const groups = run.split(/\D+/u);
  for (let from = 0; from < groups.length; from++) {
    let digits = "";
    for (let to = from; to < groups.length && digits.length < LONGEST; to++) {
      digits += groups[to];
      if (isCardNumber(digits)) return true;
    }
  }
  return false;
}

function isCardNumber(digits: string): boolean {
  return digits.length >= SHORTEST && digits.length <= LONGEST && LEADING.test(digits) && passesLuhn(digits);
}

/** Check digit by Luhn's formula: every second digit from the right doubled, digit sums added, divisible by ten. */
export function passesLuhn(digits: string): boolean {
  let sum = 0;
  for (let i = 0; i < digits.length; i++) {
    const digit = digits.charCodeAt(digits.length - 1 - i) - 48;
    const doubled = i % 2 === 1 ? digit * 2 : digit;
    sum += doubled > 9 ? doubled - 9 : doubled;
  }
  return sum % 10 === 0;
}

/** Deeper than an attribute's value nothing of an item is ever kept. */
const DEEPEST = 3;

/**
 * Where in an item a card number stands, as field names; the number is in none of them. Keys are searched like values.
 * @param exempt fields whose own values may look like card numbers
 */
export function findCardNumbers(item: unknown, exempt: ReadonlySet<string>): string[] {
  const found = new Set<string>();
  const search = (value: unknown, path: readonly string[]) => {
    if (typeof value === "string" || typeof value === "number") {
      if (holdsCardNumber(value)) found.add(path.join("."));
    } else if (typeof value === "object" && value !== null && path.length < DEEPEST) {
      for (const [key, inner] of Object.entries(value)) {
        if (holdsCardNumber(key)) found.add(path.join("."));
        else if (path.length > 0 || !exempt.has(key)) search(inner, [...path, key]);
      }
    }
  };
  search(item, []);
  return [...found];
}
