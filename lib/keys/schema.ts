import { z } from "zod";
import { SCOPES } from "../auth/codes";

const Id = z.uuid();
const Instant = z.iso.datetime();

/** Namespace of the external identifiers that come in through a key. */
const Source = z
  .string()
  .regex(
    /^[a-z0-9][a-z0-9._-]{0,63}$/,
    "needs 1 to 64 lower-case letters, digits, dots, dashes or underscores",
  );

export const KeyView = z.strictObject({
  id: Id,
  name: z.string(),
  source: z.string(),
  scopes: z.array(z.enum(SCOPES)),
  actsFor: z.strictObject({ id: Id, name: z.string() }).nullable(),
  createdAt: Instant,
  /** To the minute. */
  lastUsedAt: Instant.nullable(),
  revokedAt: Instant.nullable(),
});
export type KeyView = z.infer<typeof KeyView>;

export const KeysInput = z.strictObject({});
export const KeysView = z.strictObject({ items: z.array(KeyView), next: z.null() });
export type KeysView = z.infer<typeof KeysView>;

export const AddKeyInput = z.strictObject({
  name: z.string().trim().min(1, "needs a name").max(80),
  source: Source,
  scopes: z.array(z.enum(SCOPES)).min(1, "needs at least one scope").max(SCOPES.length),
  /** Whom the key acts for; needed with `cases:decide` and `policy:write`, and with no other scope. */
  actsForPersonId: Id.optional(),
});
export type AddKeyInput = z.infer<typeof AddKeyInput>;

/** The key itself is in the first answer only; the same request sent again gets null. */
export const AddKeyView = z.strictObject({ key: KeyView, secret: z.string().nullable() });
export type AddKeyView = z.infer<typeof AddKeyView>;

export const KeyInput = z.strictObject({ id: Id });
export type KeyInput = z.infer<typeof KeyInput>;
