import type { z } from "zod";
import type { Capability } from "./auth/access";

export type Endpoint = {
  summary: string;
  /** Capability from the access matrix, or open to everybody. */
  may: Capability | "anyone";
  /** Path parameters, query (GET) or body fields, together and by name; unknown names are refused. */
  input: z.ZodObject;
  /** Null where the answer is not JSON: a stream, a file or nothing. */
  output: z.ZodType | null;
  status?: number;
  /** Further statuses of an answer that is no error: with the same body, or none at 204. */
  also?: readonly number[];
  /** Media type of the body; `raw` leaves the request's body to the handler. */
  body?: "json" | "raw";
  /** Set where the handler of a raw body honours the Idempotency-Key itself, with `keyOf`. */
  keyed?: true;
  /** Media type of the answer where it is not JSON. */
  produces?: string;
};

export type EndpointTable = Record<`${"GET" | "POST" | "PUT" | "DELETE"} /api/${string}`, Endpoint>;

/** Names of the path parameters, in order: `/api/cases/{id}` → ["id"]. */
export function pathParameters(key: string): string[] {
  return [...key.matchAll(/\{(\w+)\}/g)].map((match) => match[1] as string);
}
