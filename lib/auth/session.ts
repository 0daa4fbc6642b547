import { z } from "zod";

/** PCI DSS 8.2.8: fifteen minutes without a sign of the person, and the password is asked for again. */
export const IDLE_SECONDS = 15 * 60;
/** The end of a session however busy it was; NIST SP 800-63B names twelve hours for its second level. */
export const LONGEST_SECONDS = 12 * 3600;

/** What the session's token says. Rights are not in it: they are read anew on every request. */
export const SessionClaims = z.object({
  sub: z.uuid(),
  sid: z.uuid(),
  sessionVersion: z.int(),
  signedInAt: z.int(),
});
export type SessionClaims = z.infer<typeof SessionClaims>;

/** @returns whether the token's session has passed its longest time */
export function isOverLongest(claims: SessionClaims, now: Date): boolean {
  return now.getTime() / 1000 >= claims.signedInAt + LONGEST_SECONDS;
}

/** The `__Host-` prefix keeps a cookie to this host and path, but browsers take it over HTTPS only. */
export function sessionCookie(appUrl: string): { name: string; secure: boolean } {
  const secure = new URL(appUrl).protocol === "https:";
  return { name: `${secure ? "__Host-" : ""}cupel.session`, secure };
}
