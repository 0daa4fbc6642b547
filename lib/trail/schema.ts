import { z } from "zod";

const Id = z.uuid();
const Instant = z.iso.datetime();

export const TrailEntryView = z.strictObject({
  seq: z.int(),
  at: Instant,
  act: z.string(),
  actor: z.strictObject({
    kind: z.enum(["person", "key", "system", "anonymous"]),
    id: z.string(),
    /** Of the person or the key; null where there is none. */
    name: z.string().nullable(),
    /** The person a key acted for. */
    onBehalfOf: z.strictObject({ id: Id, name: z.string() }).nullable(),
  }),
  subject: z.strictObject({ kind: z.string(), id: z.string(), name: z.string().nullable() }),
  case: z.strictObject({ id: Id, number: z.int() }).nullable(),
  requestId: z.string(),
  facts: z.record(z.string(), z.unknown()),
  hash: z.string(),
});
export type TrailEntryView = z.infer<typeof TrailEntryView>;

export const TrailInput = z.strictObject({
  /** `person.added`, or a family of acts: `person.` */
  act: z.string().trim().max(64).optional(),
  /** Whoever did it, or on whose behalf it was done. */
  person: Id.optional(),
  /** A case's id or its number. */
  case: z.union([Id, z.string().regex(/^\d{1,15}$/, "is neither an id nor a number")]).optional(),
  /** Kind and id of what it was done to: `key:0199…`. */
  subject: z
    .string()
    .regex(/^[a-z_]{1,32}:.{1,64}$/, "needs the form kind:id")
    .optional(),
  from: Instant.optional(),
  to: Instant.optional(),
  cursor: z.string().max(40).optional(),
  limit: z.coerce.number().int().min(1).max(500).default(100),
});
export type TrailInput = z.infer<typeof TrailInput>;

export const TrailView = z.strictObject({ items: z.array(TrailEntryView), next: z.string().nullable() });
export type TrailView = z.infer<typeof TrailView>;

const Hash = z.string().regex(/^[0-9a-f]{64}$/, "needs 64 hexadecimal digits");

export const VerifyInput = z
  .strictObject({
    /** Place and hash of an entry that was noted down outside: what was cut off at the end shows only so. */
    notedSeq: z.coerce.number().int().min(1).optional(),
    notedHash: Hash.optional(),
  })
  .refine((input) => (input.notedSeq === undefined) === (input.notedHash === undefined), {
    path: ["notedHash"],
    message: "goes together with notedSeq",
  });
export type VerifyInput = z.infer<typeof VerifyInput>;

export const VerifyView = z.strictObject({
  entries: z.int(),
  intact: z.boolean(),
  firstBrokenSeq: z.int().nullable(),
  headSeq: z.int(),
  headHash: Hash,
  notedStands: z.boolean().nullable(),
});
export type VerifyView = z.infer<typeof VerifyView>;
