import type { z } from "zod";
import type { FieldError } from "./errors";

/** One line per fault, each with the name of its field; unknown fields are named too. Values are never repeated. */
export function fieldErrors(error: z.ZodError, prefix = ""): FieldError[] {
  return error.issues.flatMap((issue) => {
    const path = [prefix, ...issue.path.map(String)].filter(Boolean).join(".");
    if (issue.code === "unrecognized_keys") {
      return issue.keys.map((key) => ({
        path: [path, key].filter(Boolean).join("."),
        message: "is not a known field",
      }));
    }
    return [{ path, message: issue.message }];
  });
}
