import "server-only";
import { DrizzleQueryError } from "drizzle-orm";
import { databaseErrno } from "@/db/errors";

export type Fault = { name: string; message: string | null; errno: number | null; stack: string | undefined };

/**
 * What a log may say of an error: where it happened, its kind, and its text unless a query failed, since the
 * database's messages repeat the values of the query.
 */
export function faultOf(error: unknown): Fault {
  if (!(error instanceof Error)) return { name: typeof error, message: null, errno: null, stack: undefined };
  const frames = error.stack?.split("\n").filter((line) => /^\s+at /.test(line));
  const errno = databaseErrno(error);
  const message = error instanceof DrizzleQueryError || errno !== null ? null : error.message;
  return { name: error.name, message, errno, stack: frames?.slice(0, 12).join("\n") };
}
