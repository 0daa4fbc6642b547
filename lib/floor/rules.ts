import type { CaseState, UNDECIDED_STATES } from "../cases/codes";
import { ZONES, type Zone } from "../policy/codes";
import { CHANNELS, type Channel } from "../transactions/codes";
import type { FloorPerson, FloorView } from "./schema";

export type CaseGroup = {
  zone: Zone;
  channel: Channel;
  state: CaseState;
  total: number;
  overdue: number;
  expiringHolds: number;
  oldestOpenedAt: Date | null;
};

type Figures = Pick<
  FloorView,
  "total" | "overdue" | "expiringHolds" | "byState" | "byZone" | "byChannel" | "oldestOpenedAt"
>;

/** The same cases, added up in each of the ways in which the floor looks at them. */
export function addUp(groups: readonly CaseGroup[]): Figures {
  const oldest = groups.flatMap(({ oldestOpenedAt }) => (oldestOpenedAt ? [oldestOpenedAt.getTime()] : []));
  const inState = (state: CaseState) => counts(groups.filter((group) => group.state === state)).total;
  return {
    ...counts(groups),
    byState: {
      open: inState("open"),
      claimed: inState("claimed"),
      waiting: inState("waiting"),
      escalated: inState("escalated"),
    } satisfies Record<(typeof UNDECIDED_STATES)[number], number>,
    byZone: ZONES.map((zone) => ({ zone, ...counts(groups.filter((group) => group.zone === zone)) })),
    byChannel: CHANNELS.map((channel) => ({
      channel,
      ...counts(groups.filter((group) => group.channel === channel)),
    })),
    oldestOpenedAt: oldest.length > 0 ? new Date(Math.min(...oldest)).toISOString() : null,
  };
}

function counts(groups: readonly CaseGroup[]) {
  const sum = (key: "total" | "overdue" | "expiringHolds") =>
    groups.reduce((total, group) => total + group[key], 0);
  return { total: sum("total"), overdue: sum("overdue"), expiringHolds: sum("expiringHolds") };
}

/** Cases by whose hands they are in and whom they are assigned to. */
export type Hand = { claimedBy: string | null; assignedTo: string | null; total: number; overdue: number };

/** One row for everybody who decides cases, and for anybody else who still has some. */
export function personRows(
  team: readonly { id: string; name: string; decides: boolean }[],
  hands: readonly Hand[],
  decided: readonly { personId: string; count: number }[],
): FloorPerson[] {
  const decidedBy = new Map(decided.map(({ personId, count }) => [personId, count]));
  const rows = team.map(({ id, name, decides }) => {
    const sum = (mine: (hand: Hand) => boolean, key: "total" | "overdue") =>
      hands.filter(mine).reduce((total, hand) => total + hand[key], 0);
    return {
      decides,
      row: {
        id,
        name,
        claimed: sum(({ claimedBy }) => claimedBy === id, "total"),
        assigned: sum(({ assignedTo }) => assignedTo === id, "total"),
        overdue: sum(({ claimedBy, assignedTo }) => claimedBy === id || assignedTo === id, "overdue"),
        decidedToday: decidedBy.get(id) ?? 0,
      },
    };
  });
  return rows
    .filter(({ decides, row }) => decides || row.claimed + row.assigned + row.decidedToday > 0)
    .map(({ row }) => row);
}
