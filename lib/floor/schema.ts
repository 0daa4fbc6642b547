import { z } from "zod";
import { CASE_KINDS, UNDECIDED_STATES } from "../cases/codes";
import { ZONES } from "../policy/codes";
import { CHANNELS } from "../transactions/codes";
import { DIRECTIONS, FLOOR_CONCERNS, FLOOR_SORTS } from "./codes";

const Id = z.uuid();
const Instant = z.iso.datetime();
const PersonRef = z.strictObject({ id: Id, name: z.string() });
const Counts = { total: z.int(), overdue: z.int(), expiringHolds: z.int() };

export const FloorPerson = z.strictObject({
  id: Id,
  name: z.string(),
  /** Cases in hand, cases assigned, and those of either past their deadline. */
  claimed: z.int(),
  assigned: z.int(),
  overdue: z.int(),
  decidedToday: z.int(),
});
export type FloorPerson = z.infer<typeof FloorPerson>;

export const FloorView = z.strictObject({
  at: Instant,
  ...Counts,
  byState: z.record(z.enum(UNDECIDED_STATES), z.int()),
  byZone: z.array(z.strictObject({ zone: z.enum(ZONES), ...Counts })),
  byChannel: z.array(z.strictObject({ channel: z.enum(CHANNELS), ...Counts })),
  oldestOpenedAt: Instant.nullable(),
  /** A hold this close to its end counts as expiring, by the policy in force. */
  expiringMinutes: z.int(),
  people: z.array(FloorPerson),
  /** Verdicts since midnight in the asker's time zone that were not taken back, and what the policy expects. */
  decidedToday: z.int(),
  dailyCapacity: z.int(),
});
export type FloorView = z.infer<typeof FloorView>;

export const FloorCasesInput = z.strictObject({
  state: z.enum(UNDECIDED_STATES).optional(),
  zone: z.enum(ZONES).optional(),
  channel: z.enum(CHANNELS).optional(),
  /** Assigned to, or in the hands of, this person; `nobody` for neither. */
  person: z.union([Id, z.literal("nobody")]).optional(),
  concern: z.enum(FLOOR_CONCERNS).optional(),
  /** A case's number, or the start of an external id or account. */
  search: z.string().trim().max(64).optional(),
  sort: z.enum(FLOOR_SORTS).default("due"),
  direction: z.enum(DIRECTIONS).default("ascending"),
  cursor: z.string().max(200).optional(),
  limit: z.coerce.number().int().min(1).max(500).default(100),
});
export type FloorCasesInput = z.output<typeof FloorCasesInput>;

export const FloorCase = z.strictObject({
  caseId: Id,
  number: z.int(),
  externalId: z.string(),
  accountId: z.string(),
  amount: z.string(),
  currency: z.string(),
  channel: z.enum(CHANNELS),
  zone: z.enum(ZONES),
  kind: z.enum(CASE_KINDS),
  state: z.enum(UNDECIDED_STATES),
  openedAt: Instant,
  dueAt: Instant,
  overdue: z.boolean(),
  /** Null unless the payment is held now. */
  holdExpiresAt: Instant.nullable(),
  assignedTo: PersonRef.nullable(),
  claimedBy: PersonRef.nullable(),
});
export type FloorCase = z.infer<typeof FloorCase>;

export const FloorCasesView = z.strictObject({
  total: z.int(),
  items: z.array(FloorCase),
  next: z.string().nullable(),
});
export type FloorCasesView = z.infer<typeof FloorCasesView>;

const CaseIds = z
  .array(Id)
  .min(1, "needs at least one case")
  .max(500, "takes at most 500 cases")
  .refine((ids) => new Set(ids).size === ids.length, "names a case twice");

export const AssignManyInput = z.strictObject({ caseIds: CaseIds, personId: Id.nullable() });
export type AssignManyInput = z.infer<typeof AssignManyInput>;

export const ReleaseManyInput = z
  .strictObject({
    caseIds: CaseIds.optional(),
    /** Every claim of this person. */
    personId: Id.optional(),
  })
  .refine((input) => (input.caseIds === undefined) !== (input.personId === undefined), {
    path: ["caseIds"],
    message: "give either caseIds or personId",
  });
export type ReleaseManyInput = z.infer<typeof ReleaseManyInput>;

/** Cases that changed; those that stood so already are not among them. */
export const ChangedCasesView = z.strictObject({ changed: z.array(Id) });
export type ChangedCasesView = z.infer<typeof ChangedCasesView>;
