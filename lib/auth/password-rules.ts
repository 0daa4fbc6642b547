import { ZxcvbnFactory } from "@zxcvbn-ts/core";
import { adjacencyGraphs, dictionary } from "@zxcvbn-ts/language-common";

/** NIST SP 800-63B-4 for a password that is the only factor; no rules about kinds of characters. */
const PASSWORD_MIN = 15;
export const PASSWORD_MAX = 256;

/** Guesses, as a power of ten, below which a password counts as made of common ones. */
const LEAST_GUESSES_LOG10 = 9;
/** The estimate's cost grows with the length; what is common shows within this many characters. */
const ESTIMATED_LENGTH = 64;
/** What must be left of a password without the person's own words. */
const LEAST_OWN_CHARACTERS = 8;

const estimator = new ZxcvbnFactory({ dictionary, graphs: adjacencyGraphs });

/**
 * Why a password cannot be taken, or null where it can. `own` are words that anybody who knows the person would
 * try first: name, e-mail address.
 */
export function passwordProblem(password: string, own: readonly string[]): string | null {
  const length = [...password].length;
  if (length < PASSWORD_MIN) return `needs at least ${PASSWORD_MIN} characters; a few words make a good one`;
  if (length > PASSWORD_MAX) return `has more than ${PASSWORD_MAX} characters`;
  const known = wordsOf(own);
  const { guessesLog10 } = estimator.check(password.slice(0, ESTIMATED_LENGTH), known);
  if (guessesLog10 < LEAST_GUESSES_LOG10 || isMadeOf(known, password)) {
    return "is too easy to guess: it repeats or joins common passwords, keys in a row, or your own name";
  }
  return null;
}

function wordsOf(own: readonly string[]): string[] {
  const words = ["cupel", ...own.flatMap((word) => [word, ...word.split(/[^\p{L}\p{N}]+/u)])];
  return words.filter((word) => word.length >= 3).map((word) => word.toLowerCase());
}

/** Whether little is left once the known words are taken out. */
function isMadeOf(known: readonly string[], password: string): boolean {
  const longestFirst = known.toSorted((a, b) => b.length - a.length);
  const rest = longestFirst.reduce((text, word) => text.replaceAll(word, ""), password.toLowerCase());
  return [...rest].length < LEAST_OWN_CHARACTERS;
}
