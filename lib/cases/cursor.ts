import { z } from "zod";
import { invalid } from "../errors";
import type { Place } from "./ranking/order";

const Cursor = z.strictObject({ v: z.int(), e: z.boolean(), k: z.number(), n: z.int() });

/** Where a page ended, and at which version. Opaque to whoever carries it. */
export function cursorOf(version: number, place: Place): string {
  const cursor: z.infer<typeof Cursor> = { v: version, e: place.expiring, k: place.key, n: place.number };
  return Buffer.from(JSON.stringify(cursor)).toString("base64url");
}

/** @throws KnownError invalid for anything that `cursorOf` did not make */
export function placeOf(cursor: string): Place {
  const { e, k, n } = parsed(cursor);
  return { expiring: e, key: k, number: n };
}

function parsed(cursor: string): z.infer<typeof Cursor> {
  try {
    return Cursor.parse(JSON.parse(Buffer.from(cursor, "base64url").toString("utf8")));
  } catch {
    throw invalid([{ path: "cursor", message: "is not one that this list gave" }]);
  }
}
