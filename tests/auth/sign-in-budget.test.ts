import { expect, test } from "vitest";
import { spendSignInBudget } from "@/lib/rate-limit";

test("an address that tries to sign in too often in a minute waits; others do not", async () => {
  for (let n = 0; n < 120; n++) await spendSignInBudget("192.0.2.1");
  const refusal = await spendSignInBudget("192.0.2.1").catch((error: unknown) => error);
  expect(refusal).toMatchObject({ code: "too_many", status: 429 });
  expect(refusal).toHaveProperty("headers.Retry-After", expect.stringMatching(/^[1-9]\d?$/));
  await expect(spendSignInBudget("192.0.2.2")).resolves.toBeUndefined();
});
