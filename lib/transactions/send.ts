import "server-only";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { receiveBatch } from "./receive";
import type { TransactionsInput, TransactionsView } from "./schema";

/** Payments sent by a machine; their identifiers are unique within its key's source. */
export async function sendTransactions(
  ctx: Context,
  { transactions }: TransactionsInput,
): Promise<TransactionsView> {
  const key = ctx.actor.kind === "person" ? ctx.actor.key : ctx.actor.kind === "key" ? ctx.actor : null;
  if (!key) throw forbidden("Payments are sent with a key; people upload files");
  return receiveBatch(ctx, { source: key.source, items: transactions });
}
