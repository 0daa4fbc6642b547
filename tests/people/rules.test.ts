import { expect, test } from "vitest";
import { losesLastAdministrator, rolesProblem } from "@/lib/people/rules";

test.each([
  [["reviewer"]],
  [["reviewer", "supervisor"]],
  [["supervisor", "risk_manager"]],
  [["auditor"]],
  [["administrator"]],
] as const)("%j can be held by one person", (roles) => {
  expect(rolesProblem(roles)).toBeNull();
});

test.each([
  [["auditor", "reviewer"], /auditor combines with no other/],
  [["supervisor", "administrator"], /administrator combines with no other/],
  [["auditor", "administrator"], /combines with no other/],
  [["reviewer", "reviewer"], /twice/],
  [[], /at least one/],
] as const)("%j cannot", (roles, message) => {
  expect(rolesProblem(roles)).toMatch(message);
});

test("the last active administrator is the one without another beside", () => {
  expect(losesLastAdministrator(["a"], "a", false)).toBe(true);
  expect(losesLastAdministrator(["a", "b"], "a", false)).toBe(false);
  expect(losesLastAdministrator(["a"], "a", true)).toBe(false);
  expect(losesLastAdministrator(["a"], "b", false)).toBe(false);
});
