import { invalid } from "../errors";

/** Where a page ended: the sort's value as the database wrote it, and the case's number. */
export type Place = { value: string; number: number };

export const cursorFor = ({ value, number }: Place): string =>
  Buffer.from(`${number} ${value}`).toString("base64url");

/** @throws KnownError invalid */
export function placeOf(cursor: string): Place {
  const match = /^(\d{1,15}) ([-\d:. ]{1,40})$/.exec(Buffer.from(cursor, "base64url").toString());
  if (!match) throw invalid([{ path: "cursor", message: "is not one that this list gave out" }]);
  return { number: Number(match[1]), value: match[2] as string };
}
