// The one list of tables: the client and the migration generator need them together.
export * from "./approvals";
export * from "./cases";
export * from "./learning";
export * from "./mail";
export * from "./outcomes";
export * from "./people";
export * from "./policies";
export * from "./scorers";
export * from "./trail";
export * from "./transactions";
