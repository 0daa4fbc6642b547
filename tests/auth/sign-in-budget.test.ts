import { expect, inject, test, vi } from "vitest";
import { spendSignInBudget } from "@/lib/rate-limit";

test("an address that tries to sign in too often in a minute waits; others do not", async () => {
  vi.stubEnv("DATABASE_URL", inject("mariadb").url);
  vi.stubEnv("SMTP_URL", inject("smtpUrl"));
  vi.stubEnv("AUTH_SECRET", "a secret of the tests, 32 letters or more");
  vi.stubEnv("CUPEL_SIGN_INS_PER_MINUTE", "30");
  for (let n = 0; n < 30; n++) await spendSignInBudget("192.0.2.1");
  const refusal = await spendSignInBudget("192.0.2.1").catch((error: unknown) => error);
  expect(refusal).toMatchObject({ code: "too_many", status: 429 });
  expect(refusal).toHaveProperty("headers.Retry-After", expect.stringMatching(/^[1-9]\d?$/));
  await expect(spendSignInBudget("192.0.2.2")).resolves.toBeUndefined();
});
