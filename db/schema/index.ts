// The one list of tables: the client and the migration generator need them together.
export * from "./cases.ts";
export * from "./mail.ts";
export * from "./outcomes.ts";
export * from "./people.ts";
export * from "./policies.ts";
export * from "./scorers.ts";
export * from "./trail.ts";
export * from "./transactions.ts";
