import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { outbox } from "@/db/schema/mail";
import { notFound, ruleBroken } from "../errors";
import type { MailState } from "./rules";

/** Locks a message that waits for a person's word. @throws KnownError not_found, rule_broken */
export async function lockUnsettled(tx: Tx, id: string, states: readonly MailState[]) {
  const [row] = await tx.select().from(outbox).where(eq(outbox.id, id)).for("update");
  if (!row) throw notFound("The message");
  if (!states.includes(row.state)) throw ruleBroken("This message does not wait for anybody's word");
  return row;
}
