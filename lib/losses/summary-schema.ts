import { z } from "zod";
import { MAIL_KINDS, MAIL_STATES } from "../mail/codes";
import { Week } from "./schema";

const Id = z.uuid();
const Instant = z.iso.datetime();

export const RecipientInput = z.strictObject({
  personId: Id,
  /** ISO weekday, 1 = Monday, and hour, both on the person's own clock. */
  weekday: z.int().min(1).max(7),
  hour: z.int().min(0).max(23),
});
export type RecipientInput = z.infer<typeof RecipientInput>;

export const RecipientRef = z.strictObject({ personId: Id });
export type RecipientRef = z.infer<typeof RecipientRef>;

export const RecipientView = z.strictObject({
  personId: Id,
  name: z.string(),
  timeZone: z.string(),
  weekday: z.int(),
  hour: z.int(),
  /** False where the person ended it; only a risk manager's word begins it again. */
  subscribed: z.boolean(),
});
export type RecipientView = z.infer<typeof RecipientView>;

export const RecipientsView = z.strictObject({
  items: z.array(RecipientView),
  /** People who may read losses and are not on the list. */
  others: z.array(z.strictObject({ personId: Id, name: z.string() })),
});
export type RecipientsView = z.infer<typeof RecipientsView>;

export const SummariesInput = z.strictObject({
  week: Week.optional(),
  cursor: Id.optional(),
  limit: z.coerce.number().int().min(1).max(100).default(25),
});
export type SummariesInput = z.infer<typeof SummariesInput>;

export const SummaryItem = z.strictObject({
  id: Id,
  /** Other mail is listed only while it waits for somebody's word. */
  kind: z.enum(MAIL_KINDS),
  week: z.string().nullable(),
  person: z.strictObject({ id: Id, name: z.string() }),
  state: z.enum(MAIL_STATES),
  attempts: z.int(),
  createdAt: Instant,
  sentAt: Instant.nullable(),
  /** When it is tried again, while it waits. */
  nextAttemptAt: Instant.nullable(),
  problem: z.string().nullable(),
});
export type SummaryItem = z.infer<typeof SummaryItem>;

export const SummariesView = z.strictObject({ items: z.array(SummaryItem), next: Id.nullable() });
export type SummariesView = z.infer<typeof SummariesView>;

export const SummaryInput = z.strictObject({ id: Id });

/** A message as it went out, or would; the secret of its unsubscribe address is left out. */
export const SummaryContentView = z.strictObject({ subject: z.string(), html: z.string(), text: z.string() });
export type SummaryContentView = z.infer<typeof SummaryContentView>;

export const WeekInput = z.strictObject({ week: Week.optional() });
export type WeekInput = z.infer<typeof WeekInput>;

export const SendNowView = z.strictObject({
  week: z.string(),
  queued: z.int(),
  /** Recipients who had been sent this week's summary before. */
  alreadyQueued: z.int(),
});
export type SendNowView = z.infer<typeof SendNowView>;

/** Anything: a wrong secret is answered like a right one. */
export const UnsubscribeInput = z.strictObject({ token: z.string().max(200) });
export type UnsubscribeInput = z.infer<typeof UnsubscribeInput>;
