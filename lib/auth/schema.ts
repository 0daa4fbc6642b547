import { z } from "zod";

export const Email = z.string().trim().toLowerCase().pipe(z.email()).pipe(z.string().max(254));

/** As the form sends it. The password is bounded here, because hashing a very long one costs the server. */
export const SignInInput = z.object({
  email: Email,
  password: z.string().min(1).max(1024),
  /** Comes with a one-time password, which opens nothing but the way to a password of one's own. */
  newPassword: z.string().max(1024).optional(),
});
export type SignInInput = z.infer<typeof SignInInput>;

/** What the form is told. `refused` gives no reason: a stranger must not learn which accounts exist. */
const SIGN_IN_REFUSALS = ["refused", "new_password_needed", "new_password_refused", "too_many"] as const;
export type SignInRefusal = (typeof SIGN_IN_REFUSALS)[number];
