import "server-only";
import type { Tx } from "@/db/client";
import { isDuplicate } from "@/db/errors";
import { outbox } from "@/db/schema/mail";
import { newId } from "../new-id";
import type { MAIL_KINDS } from "./codes";
import { refusalOfSubject } from "./rules";

export type Message = {
  /** Kind, period and person: a second message under the same key is not queued. */
  dedupeKey: string;
  kind: (typeof MAIL_KINDS)[number];
  period?: string;
  personId: string;
  recipient: string;
  subject: string;
  html: string;
  text: string;
  headers?: Record<string, string>;
  unsubscribeHash?: Buffer;
};

/**
 * Queues a message inside the transaction whose doing it reports, so that both happen or neither.
 * The Message-ID is given here, once, and stays through every attempt.
 * @returns false where the same message was queued before
 * @throws Error for a subject that would show what it must not
 */
export async function enqueueMail(
  tx: Tx,
  message: Message,
  at: { appUrl: string; now: Date },
): Promise<boolean> {
  const refusal = refusalOfSubject(message.subject);
  if (refusal) throw new Error(refusal);
  const id = newId();
  try {
    await tx.insert(outbox).values({
      ...message,
      id,
      headers: message.headers ?? {},
      messageId: `<${id}@${new URL(at.appUrl).hostname}>`,
      state: "queued",
      nextAttemptAt: at.now,
      createdAt: at.now,
    });
    return true;
  } catch (error) {
    if (isDuplicate(error)) return false;
    throw error;
  }
}
