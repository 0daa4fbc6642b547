import { expect, test } from "vitest";
import { csvLine } from "@/lib/csv";

test("cells with commas, quotes or line breaks are quoted and their quotes doubled (RFC 4180)", () => {
  expect(csvLine(["a", 'b"c', "d,e", "f\ng", null])).toBe('a,"b""c","d,e","f\ng",\r\n');
});

// Leading characters named by OWASP ASVS 5.0, requirement 1.2.10.
test.each(["=1+1", "+1", "-1", "@SUM(A1)", "\t=1", '=HYPERLINK("http://example.invalid")'])(
  "the text cell %j cannot start a formula in a spreadsheet",
  (cell) => {
    expect(csvLine([cell]).replace(/^"/, "").startsWith("'")).toBe(true);
  },
);

test("a negative number stays a number", () => {
  expect(csvLine([-12.5])).toBe("-12.5\r\n");
});
