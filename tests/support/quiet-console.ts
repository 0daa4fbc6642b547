import { afterAll, afterEach } from "vitest";

const printed: string[] = [];

/** Anything printed as an error is a fault nobody handled, or a warning nobody read: the test that caused it fails. */
console.error = (...parts: unknown[]) => {
  printed.push(
    parts.map((part) => (part instanceof Error ? (part.stack ?? part.message) : String(part))).join(" "),
  );
};

function failIfPrinted() {
  const all = printed.splice(0);
  if (all.length > 0) throw new Error(`console.error was called:\n${all.join("\n")}`);
}

afterEach(failIfPrinted);
afterAll(failIfPrinted);
