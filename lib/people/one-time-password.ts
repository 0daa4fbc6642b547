import "server-only";
import { randomInt } from "node:crypto";

/** Without characters that are taken for one another when read aloud or copied by hand. */
const ALPHABET = "abcdefghjkmnpqrstuvwxyz23456789";
const GROUPS = 4;
const GROUP_LENGTH = 5;

/** About 99 random bits, in groups that can be read out. */
export function newOneTimePassword(): string {
  const group = () =>
    Array.from({ length: GROUP_LENGTH }, () => ALPHABET.charAt(randomInt(ALPHABET.length))).join("");
  return Array.from({ length: GROUPS }, group).join("-");
}
