import type { z } from "zod";
import { createDatabase } from "@/db/client";
import type { Context } from "@/lib/context";
import { environment } from "@/lib/env";
import { KnownError } from "@/lib/errors";
import { fieldErrors } from "@/lib/field-errors";
import { newId } from "@/lib/new-id";

/** The command was not asked as it wants to be; printed with how it does. */
export class UsageError extends Error {}

/** Runs a use case as the command line, which the trail names as the actor, and prints the lines it answers. */
export async function runOnDatabase(
  usage: string,
  work: (ctx: Context, args: string[]) => Promise<string[]>,
): Promise<void> {
  const { db, close } = createDatabase(environment().DATABASE_URL, 2);
  const ctx: Context = {
    actor: { kind: "system", job: "command line" },
    db,
    now: () => new Date(),
    requestId: newId(),
    idempotency: null,
  };
  try {
    for (const line of await work(ctx, process.argv.slice(2))) console.log(line);
  } catch (error) {
    const lines = messageLines(error, usage);
    if (!lines) throw error;
    for (const line of lines) console.error(line);
    process.exitCode = 1;
  } finally {
    await close();
  }
}

/** Input of a use case from options. @throws KnownError with a line for each field that is wrong */
export function checked<S extends z.ZodType>(schema: S, given: unknown): z.output<S> {
  const result = schema.safeParse(given);
  if (result.success) return result.data;
  throw new KnownError("invalid", "Some options are not right:", { errors: fieldErrors(result.error) });
}

/** `"a, b"` → `["a", "b"]`; nothing given is nothing listed. */
export function listed(option: string | undefined): string[] {
  return (option ?? "").split(",").flatMap((part) => part.trim() || []);
}

function messageLines(error: unknown, usage: string): string[] | null {
  if (error instanceof KnownError) {
    return [error.message, ...error.errors.map(({ path, message }) => `  ${path}: ${message}`)];
  }
  const isUnknownOption = error instanceof TypeError && "code" in error;
  if (error instanceof UsageError || isUnknownOption) return [error.message, usage];
  return null;
}
