import { expect, test } from "vitest";
import type { PersonActor } from "@/lib/context";
import { KnownError } from "@/lib/errors";
import { refuseForeignOrigin } from "@/lib/origin";

const person: PersonActor = {
  kind: "person",
  personId: "01900000-0000-7000-8000-000000000001",
  name: "Somebody",
  roles: ["reviewer"],
  timeZone: "UTC",
  key: null,
};

const write = (headers: Record<string, string>) =>
  refuseForeignOrigin(
    new Request("http://desk.example/api/queue/next", { method: "POST", headers: new Headers(headers) }),
    person,
  );

test("a write whose origin is no address, as a sandboxed page sends it, is refused like any foreign one", () => {
  for (const origin of ["null", "", "desk.example"]) {
    expect(() => write({ Host: "desk.example", Origin: origin }), origin).toThrow(KnownError);
  }
  expect(() => write({ Host: "desk.example", Origin: "http://desk.example" })).not.toThrow();
});
