import { signIn } from "next-auth/react";

export type Credentials = { email: string; password: string; newPassword?: string };

/** Why the server did not sign the person in, in words, and whether it waits for a password of their own. */
export type SignInProblem = { message: string; asksNewPassword: boolean };

const MESSAGES: Record<string, string> = {
  refused:
    "E-mail and password do not fit together, or the account cannot be used now. After ten failures it is locked for 30 minutes.",
  new_password_needed: "This is a one-time password. Choose one of your own to go on.",
  too_many: "Too many attempts from this address. Wait a minute, then try again.",
};
const UNREACHABLE = "The server did not answer as it should. Check the connection and try again.";

/** Signs in by next-auth's own protocol. @returns null once signed in */
export async function sendCredentials(credentials: Credentials): Promise<SignInProblem | null> {
  let answer: Awaited<ReturnType<typeof signIn<"credentials">>>;
  try {
    answer = await signIn("credentials", { ...credentials, redirect: false });
  } catch {
    return { message: UNREACHABLE, asksNewPassword: false };
  }
  if (answer?.ok && !answer.error) return null;
  const [code = "", ...detail] = (answer?.error ?? "").split(":");
  if (code === "new_password_refused") {
    return { message: `The new password ${detail.join(":")}.`, asksNewPassword: true };
  }
  return { message: MESSAGES[code] ?? UNREACHABLE, asksNewPassword: code === "new_password_needed" };
}
