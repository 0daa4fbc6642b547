import { type ChainedFields, entryHash, GENESIS_HASH } from "./chain";

export type ChainRow = ChainedFields & { previousHash: Buffer; hash: Buffer };
export type Head = { seq: number; hash: Buffer };
export type ChainCheck = {
  /** Entries whose hash was worked out again. */
  entries: number;
  intact: boolean;
  /** Place of the first entry that is missing, out of order or not what its hash says; null while intact. */
  firstBrokenSeq: number | null;
  last: Head;
};

export const EMPTY_CHECK: ChainCheck = {
  entries: 0,
  intact: true,
  firstBrokenSeq: null,
  last: { seq: 0, hash: GENESIS_HASH },
};

/**
 * Takes the next rows of the chain, in order of `seq`, into the check. A change, a gap, a stranger or a swap shows at
 * its place; what is cut off at the end shows only against a head (`endsAt`).
 */
export function checkRows(check: ChainCheck, rows: readonly ChainRow[]): ChainCheck {
  let { entries, last } = check;
  if (!check.intact) return check;
  for (const row of rows) {
    const { previousHash, hash, ...fields } = row;
    const follows = row.seq === last.seq + 1 && previousHash.equals(last.hash);
    if (!follows || !entryHash(fields, previousHash).equals(hash)) {
      return { entries, intact: false, firstBrokenSeq: last.seq + 1, last };
    }
    entries++;
    last = { seq: row.seq, hash };
  }
  return { ...check, entries, last };
}

/** The check once all rows are in, against the head that should be the last of them. */
export function endsAt(check: ChainCheck, head: Head): ChainCheck {
  if (!check.intact || (check.last.seq === head.seq && check.last.hash.equals(head.hash))) return check;
  const firstBrokenSeq = check.last.seq < head.seq ? check.last.seq + 1 : check.last.seq;
  return { ...check, intact: false, firstBrokenSeq };
}
