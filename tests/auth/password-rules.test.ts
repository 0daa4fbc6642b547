import { expect, test } from "vitest";
import { DEMO_PEOPLE } from "@/db/demo/people";
import { PASSWORD_MAX, passwordProblem } from "@/lib/auth/password-rules";

// NIST SP 800-63B-4: at least 15 characters as the only factor, no composition rules, a blocklist, 64 and more allowed.
test.each([
  "touchstone and silver",
  "correct horse battery staple",
  "ünter der alten linde",
  "        x        q        ",
  "k7fm2-9wq4z-xx3pd-8hjnb",
  `${"slow brass scales weigh the heavier half ".repeat(4)}`,
])("takes %j, whatever kinds of characters it has", (password) => {
  expect(passwordProblem(password, ["ines.vardal@demo.example", "Ines Vardal"])).toBeNull();
});

test("counts characters as people do, not bytes or UTF-16 units", () => {
  expect(passwordProblem("🙂".repeat(14), [])).toMatch(/at least 15/);
  expect(passwordProblem("fourteen chars", [])).toMatch(/at least 15/);
});

test("bounds the length, far above what a person types", () => {
  expect(passwordProblem("q7!x".repeat(64), [])).not.toMatch(/more than/);
  expect(passwordProblem("x".repeat(PASSWORD_MAX + 1), [])).toMatch(/more than 256/);
});

test.each([
  "passwordpassword",
  "123456789012345",
  "1234567890123456",
  "aaaaaaaaaaaaaaaa",
  "qwertyuiopasdfgh",
  "P@ssw0rdP@ssw0rd",
  "iloveyouiloveyou",
  "letmeinletmein123",
  "abcdefghijklmnop",
  "Password12345678!",
])("refuses %s, which is common or built from what is", (password) => {
  expect(passwordProblem(password, [])).toMatch(/too easy to guess/);
});

test("refuses a password made of the person's own name or address", () => {
  const own = ["ines.vardal@demo.example", "Ines Vardal"];
  expect(passwordProblem("inesvardalinesvardal", own)).toMatch(/too easy to guess/);
  expect(passwordProblem("ines.vardal@demo.example", own)).toMatch(/too easy to guess/);
});

test("the demo's published passwords are ones the product would take", () => {
  for (const { password, email, name } of DEMO_PEOPLE) {
    expect(passwordProblem(password, [email, name])).toBeNull();
  }
});
