import { z } from "zod";
import { ROLES } from "../auth/codes";
import { TimeZone } from "../people/schema";

export const ProfileInput = z.strictObject({});

export const ProfileView = z.strictObject({
  id: z.uuid(),
  email: z.string(),
  name: z.string(),
  roles: z.array(z.enum(ROLES)),
  timeZone: z.string(),
});
export type ProfileView = z.infer<typeof ProfileView>;

export const ChangePasswordInput = z.strictObject({
  currentPassword: z.string().min(1, "is needed").max(1024),
  newPassword: z.string().max(1024),
});
export type ChangePasswordInput = z.infer<typeof ChangePasswordInput>;

export const SetTimeZoneInput = z.strictObject({ timeZone: TimeZone });
export type SetTimeZoneInput = z.infer<typeof SetTimeZoneInput>;
