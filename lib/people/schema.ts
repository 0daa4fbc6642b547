import { z } from "zod";
import { PERSON_STATES, ROLES } from "../auth/codes";
import { Email } from "../auth/schema";

const Id = z.uuid();
const Instant = z.iso.datetime();
const Roles = z.array(z.enum(ROLES)).min(1, "needs at least one role").max(ROLES.length);

export const TimeZone = z.string().refine((zone) => isTimeZone(zone), "is not an IANA time zone");

/** Old and new names alike: what one browser calls Asia/Katmandu is Asia/Kathmandu to another. Offsets are no zones. */
function isTimeZone(zone: string): boolean {
  if (!/^[A-Za-z]/.test(zone)) return false;
  try {
    new Intl.DateTimeFormat("en", { timeZone: zone });
    return true;
  } catch {
    return false;
  }
}

export const PersonView = z.strictObject({
  id: Id,
  email: z.string(),
  name: z.string(),
  roles: z.array(z.enum(ROLES)),
  state: z.enum(PERSON_STATES),
  timeZone: z.string(),
  /** Set while too many failed sign-ins keep the account locked. */
  lockedUntil: Instant.nullable(),
  /** The password was given by an administrator and not replaced yet. */
  passwordIsOneTime: z.boolean(),
  createdAt: Instant,
  lastSignInAt: Instant.nullable(),
});
export type PersonView = z.infer<typeof PersonView>;

export const PeopleInput = z.strictObject({
  /** Part of a name or an e-mail address. */
  search: z.string().trim().max(120).optional(),
  state: z.enum(PERSON_STATES).optional(),
  role: z.enum(ROLES).optional(),
});
export type PeopleInput = z.infer<typeof PeopleInput>;

export const PeopleView = z.strictObject({ items: z.array(PersonView), next: z.null() });
export type PeopleView = z.infer<typeof PeopleView>;

export const AddPersonInput = z.strictObject({
  email: Email,
  name: z.string().trim().min(1, "needs a name").max(120),
  roles: Roles,
  timeZone: TimeZone.default("UTC"),
});
export type AddPersonInput = z.infer<typeof AddPersonInput>;

/** The one-time password is in the first answer only; the same request sent again gets null. */
export const OneTimePasswordView = z.strictObject({
  person: PersonView,
  oneTimePassword: z.string().nullable(),
});
export type OneTimePasswordView = z.infer<typeof OneTimePasswordView>;

export const PersonInput = z.strictObject({ id: Id });
export type PersonInput = z.infer<typeof PersonInput>;

export const SetRolesInput = PersonInput.extend({ roles: Roles });
export type SetRolesInput = z.infer<typeof SetRolesInput>;
