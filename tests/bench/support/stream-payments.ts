import { DAY_MS } from "@/lib/signals/facts";
import { seededNumbers } from "../../scorer/fixture";
import { readRows } from "./stream";

/** One payment of the outside stream, of which only time, account, counterparty and amount are known. */
export type StreamPayment = {
  externalId: string;
  /** The amount as the file writes it. */
  amount: string;
  atMs: number;
  amountMinor: number;
  accountId: string;
  counterpartyId: string;
  /** Days since the first of the stream: 0, 1, … */
  day: number;
  isFraud: boolean;
};

/** The stream in order of time, from the two files that `--stream` and `--stream-fraud` name. */
export async function readStream(file: string, fraudFile: string): Promise<StreamPayment[]> {
  const fraud = new Set((await readRows(fraudFile)).map((row) => row.externalId));
  const rows = await readRows(file);
  const startMs = Date.parse(`${rows[0]?.occurredAt?.slice(0, 10)}T00:00:00Z`);
  return rows.map(
    ({ externalId = "", occurredAt = "", amount = "", accountId = "", counterpartyId = "" }) => {
      const atMs = Date.parse(occurredAt);
      const isFraud = fraud.has(externalId);
      const day = Math.floor((atMs - startMs) / DAY_MS);
      const amountMinor = Math.round(Number(amount) * 100);
      return { externalId, amount, atMs, amountMinor, accountId, counterpartyId, day, isFraud };
    },
  );
}

/** Drops fraudulent payments, chosen by a fixed seed, until one payment in so many is fraudulent. */
export function thinFraud(payments: readonly StreamPayment[], oneIn: number): StreamPayment[] {
  const fraud = payments.filter((payment) => payment.isFraud);
  const legitimate = payments.length - fraud.length;
  const next = seededNumbers(1_000);
  const drawn = fraud.map((payment) => ({ payment, at: next() })).sort((a, b) => a.at - b.at);
  const kept = new Set(drawn.slice(0, Math.round(legitimate / (oneIn - 1))).map(({ payment }) => payment));
  return payments.filter((payment) => !payment.isFraud || kept.has(payment));
}
