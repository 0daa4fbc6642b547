import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { trail } from "@/db/schema/trail";
import { receiveTransactions } from "@/lib/transactions/receive";
import { listExemptFields, setExemptFields } from "@/lib/transactions/set-exempt-fields";
import { testWorld, type World } from "../support/world";
import { paymentItems } from "./payments";

let world: World;
beforeAll(async () => {
  world = await testWorld();
});

describe("identifier fields exempt from the search for card numbers", () => {
  it("are set by an administrator, for one source, and in the trail", async () => {
    const administrator = world.ctx(await world.person("administrator"));
    const system = world.ctx({ kind: "system", job: "test" });
    const externalId = "4111111111111111";
    const send = (source: string) =>
      receiveTransactions(system, { source, items: paymentItems(1, { externalId }) });
    expect((await send("ledger"))[0]).toMatchObject({ status: "rejected", externalId: null });

    const wanted = { exemptIdentifierFields: { ledger: ["externalId" as const] } };
    expect(await setExemptFields(administrator, wanted)).toEqual(wanted);
    expect(await listExemptFields(administrator)).toEqual(wanted);
    expect((await send("ledger"))[0]?.status).toBe("created");
    expect((await send("elsewhere"))[0]?.status).toBe("rejected");
    expect((await send("constructor"))[0]?.status).toBe("rejected");
    const [entry] = await world.db.select().from(trail).where(eq(trail.act, "intake.exemptions_set"));
    expect(JSON.parse(entry?.facts ?? "")).toEqual({ before: {}, after: wanted.exemptIdentifierFields });
  });

  it("are not for others to set", async () => {
    for (const role of ["reviewer", "supervisor", "risk_manager", "auditor"] as const) {
      const ctx = world.ctx(await world.person(role));
      await expect(setExemptFields(ctx, { exemptIdentifierFields: {} })).rejects.toMatchObject({
        code: "forbidden",
      });
    }
  });
});
