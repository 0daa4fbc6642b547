import type { LabelKind } from "../decisions/codes";
import type { Label } from "../scorer";

/** A row of the label log without its vector. */
export type FindingRow = {
  seq: number;
  kind: LabelKind;
  label: Label | 0;
  transactionId: string;
  caseId: string | null;
  decisionId: string | null;
  outcomeId: string | null;
  /** Who found it; of a removal, whose findings it took away. */
  personId: string | null;
  at: Date;
};

/**
 * The finding that holds at a place of the label log: the last one that was neither undone nor removed.
 * @param rows all of the place, oldest first
 * @param without a person who shall be taken as never having found anything there
 */
export function findingThatHolds(
  rows: readonly FindingRow[],
  without: string | null = null,
): FindingRow | null {
  const removed = new Set(without === null ? [] : [without]);
  const undone = new Set<string>();
  for (const row of rows.toReversed()) {
    if (row.kind === "removal") {
      if (row.personId !== null) removed.add(row.personId);
    } else if (row.kind === "undo") {
      if (row.decisionId !== null) undone.add(row.decisionId);
    } else if (!isOut(row, removed, undone)) return row;
  }
  return null;
}

function isOut(
  { personId, decisionId }: FindingRow,
  removed: ReadonlySet<string>,
  undone: ReadonlySet<string>,
): boolean {
  return (personId !== null && removed.has(personId)) || (decisionId !== null && undone.has(decisionId));
}

/** What the log says at a place now: its last row's label. */
export const labelAt = (rows: readonly FindingRow[]): Label | 0 => rows.at(-1)?.label ?? 0;

/** Neither an undo nor a removal, nor taken away by a later removal. */
function isFinding(row: FindingRow, rows: readonly FindingRow[]): boolean {
  const removal = rows.find((one) => one.kind === "removal" && one.personId === row.personId);
  return row.kind !== "undo" && row.kind !== "removal" && (removal === undefined || removal.seq < row.seq);
}

/** What became of the labels that a person gave. */
export type GivenLabels = {
  /** In force, and how many of them are fraudulent. */
  labels: number;
  fraudulent: number;
  firstAt: Date | null;
  lastAt: Date | null;
  /** Given and not taken back by themselves. */
  given: number;
  /** Of those given: another person found otherwise later. */
  corrected: number;
  /** Of those given: an outcome overturned it. */
  overturned: number;
};

export class GivenLabelsByPerson {
  private readonly people = new Map<string, GivenLabels>();

  /** Takes in all rows of one place, oldest first. */
  addPlace(rows: readonly FindingRow[]): void {
    const undone = new Set(rows.flatMap((row) => (row.kind === "undo" ? (row.decisionId ?? []) : [])));
    rows.forEach((row, at) => {
      const { personId, kind, label, decisionId } = row;
      if (personId === null || label === 0 || kind === "removal" || kind === "undo") return;
      if (decisionId !== null && undone.has(decisionId)) return;
      const person = this.of(personId);
      person.given += 1;
      const against = rows.filter((one, n) => n > at && one.label !== label && isFinding(one, rows));
      if (against.some((one) => one.personId !== null && one.personId !== personId)) person.corrected += 1;
      if (against.some((one) => one.kind === "outcome")) person.overturned += 1;
    });
    const holds = findingThatHolds(rows);
    if (holds?.personId && holds.label !== 0) this.addInForce(holds.personId, holds.label, holds.at);
  }

  entries(): [string, GivenLabels][] {
    return [...this.people.entries()];
  }

  private addInForce(personId: string, label: Label, at: Date): void {
    const person = this.of(personId);
    person.labels += 1;
    if (label === 1) person.fraudulent += 1;
    if (!person.firstAt || at < person.firstAt) person.firstAt = at;
    if (!person.lastAt || at > person.lastAt) person.lastAt = at;
  }

  private of(personId: string): GivenLabels {
    const known = this.people.get(personId);
    if (known) return known;
    const none = { labels: 0, fraudulent: 0, given: 0, corrected: 0, overturned: 0 };
    const fresh: GivenLabels = { ...none, firstAt: null, lastAt: null };
    this.people.set(personId, fresh);
    return fresh;
  }
}
