/** Why a formula is refused, and where: characters from `at` on, null where no place can be named. */
export type FormulaProblem = { message: string; at: number | null; length: number };

export class FormulaRefused extends Error {
  constructor(readonly problem: FormulaProblem) {
    super(problem.message);
  }
}

export function refuse(message: string, at: number | null = null, length = 1): never {
  throw new FormulaRefused({ message, at, length: at === null ? 0 : length });
}

export const LONGEST_FORMULA = 1_000;
/** Brackets inside brackets. The parser goes down once a bracket, so this is checked before it sees the text. */
const DEEPEST_BRACKETS = 24;
const LONGEST_TEXT = 64;

/**
 * Signs that people write, and what they stand for; one character each, so that places stay where they are. A line may
 * end anywhere: to the parser that would begin another statement.
 */
const SIGNS: Readonly<Record<string, string>> = {
  "−": "-",
  "×": "*",
  "·": "*",
  "÷": "/",
  "\n": " ",
  "\r": " ",
  "\t": " ",
};
/** Outside texts: no statement, comment, object, array of its own, escape, transpose or letter beyond ASCII. */
const ALLOWED = /[A-Za-z0-9_ .,()[\]+\-*/^%<>=!?:"]/;

/**
 * Checks a formula's characters and size before any parser does, and gives it in plain signs. Texts stand in double
 * quotes and know no escapes.
 * @returns the formula, and a copy of the same length with its texts blanked out
 */
export function plainText(formula: string): { text: string; outsideTexts: string } {
  if (formula.length > LONGEST_FORMULA) {
    refuse(`A formula has at most ${LONGEST_FORMULA} characters`, LONGEST_FORMULA, 1);
  }
  if (formula.trim() === "") refuse("Write a formula", 0, 1);
  let text = "";
  let outsideTexts = "";
  let depth = 0;
  let openedAt = -1;
  for (let at = 0; at < formula.length; at++) {
    const sign = formula[at] as string;
    if (openedAt >= 0) {
      if (sign === "\\" || sign < " ") refuse("A text holds no escapes and no line ends", at);
      if (sign === '"') {
        if (at - openedAt - 1 > LONGEST_TEXT)
          refuse(`A text has at most ${LONGEST_TEXT} characters`, openedAt, at - openedAt + 1);
        openedAt = -1;
      }
      text += sign;
      outsideTexts += " ";
      continue;
    }
    const plain = SIGNS[sign] ?? sign;
    if (!ALLOWED.test(plain)) refuse(`“${sign}” has no meaning in a formula`, at);
    if (plain === '"') openedAt = at;
    if (plain === "(" || plain === "[") depth += 1;
    if (plain === ")" || plain === "]") depth -= 1;
    if (depth > DEEPEST_BRACKETS) refuse(`Brackets stand at most ${DEEPEST_BRACKETS} deep`, at);
    text += plain;
    outsideTexts += plain === '"' ? " " : plain;
  }
  if (openedAt >= 0) refuse("This text has no end", openedAt, formula.length - openedAt);
  return { text, outsideTexts };
}

/** Where a name or a sign first stands outside texts; null where it does not. */
export function placeOf(part: string, outsideTexts: string): number | null {
  const isName = /^\w+$/.test(part);
  for (let from = 0; ; ) {
    const at = outsideTexts.indexOf(part, from);
    if (at < 0) return null;
    const isWhole =
      !isName || !(/\w/.test(outsideTexts[at - 1] ?? "") || /\w/.test(outsideTexts[at + part.length] ?? ""));
    if (isWhole) return at;
    from = at + 1;
  }
}
