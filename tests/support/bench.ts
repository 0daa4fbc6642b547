/** One measured figure beside what it is held to: a limit, or a peer measured in the same run. */
export type Row = { name: string; measured: string; limit: string; ok: boolean };

/** What each file of tests/bench exports. It finds its empty, migrated database in DATABASE_URL. */
export type Bench = {
  run: () => Promise<Row[]>;
  /** Environment variables without which it is not run. */
  needs?: ("CUPEL_STREAM" | "CUPEL_STREAM_FRAUD")[];
};
