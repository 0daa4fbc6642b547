import { createTransport } from "nodemailer";
import { expect, inject, test } from "vitest";
import { testDatabase } from "../support/database";
import { mailTo, waitForMail } from "../support/mail";

const database = await testDatabase();

test("each test file has a migrated schema of its own, in UTC, comparing keys byte for byte", async () => {
  const [rows] = await database.pool.query(
    `SELECT DATABASE() AS name, @@time_zone AS zone, @@collation_database AS collation,
            (SELECT COUNT(*) FROM information_schema.tables WHERE table_schema = DATABASE()) > 0 AS migrated`,
  );
  const schema = new URL(database.url).pathname.slice(1);
  expect(rows).toEqual([{ name: schema, zone: "+00:00", collation: "utf8mb4_nopad_bin", migrated: 1 }]);
});

test("tests act with the app's rights, which do not reach the schema itself", async () => {
  await expect(database.pool.query("CREATE TABLE mine (id int)")).rejects.toThrow(/denied/);
});

test("the suite runs far from UTC", () => {
  expect(new Date("2026-07-01T00:00:00Z").getTimezoneOffset()).toBe(-765);
});

test("mail sent over SMTP is read back by its recipient alone", async () => {
  const transport = createTransport(inject("smtpUrl"));
  await transport.sendMail({
    from: "desk@cupel.test",
    to: "reader@cupel.test",
    subject: "Grüße",
    text: "One",
    html: "<p>One</p>",
  });
  const [mail, ...others] = await waitForMail("reader@cupel.test");
  expect(others).toEqual([]);
  expect(mail).toMatchObject({
    subject: "Grüße",
    html: "<p>One</p>",
    from: [{ address: "desk@cupel.test" }],
  });
  expect(await mailTo("nobody@cupel.test")).toEqual([]);
});
