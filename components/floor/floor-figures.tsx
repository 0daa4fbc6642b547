import Link from "next/link";
import type { FloorView } from "@/lib/floor/schema";
import { Figure, FigureRow } from "../ui/figure";
import { Time } from "../ui/time";

const LINK = "underline decoration-edge underline-offset-4 hover:decoration-ink";

/** What needs a look now; every number leads to its cases. */
export function FloorFigures({ view }: { view: FloorView }) {
  const { byState, decidedToday, dailyCapacity } = view;
  const to = (query: string, value: number) => (
    <Link href={`/floor${query}`} scroll={false} className={LINK}>
      {value}
    </Link>
  );
  return (
    <FigureRow>
      <Figure
        label="Undecided"
        value={to("", view.total)}
        note={
          view.oldestOpenedAt ? (
            <>
              oldest since <Time at={view.oldestOpenedAt} as="short" />
            </>
          ) : (
            "nothing waits"
          )
        }
      />
      <Figure
        label="Holds about to end"
        value={to("?concern=expiring&sort=hold", view.expiringHolds)}
        note={`within ${view.expiringMinutes} min`}
      />
      <Figure label="Overdue" value={to("?concern=overdue", view.overdue)} note="past their deadline" />
      <Figure label="In hand" value={to("?state=claimed", byState.claimed)} />
      <Figure label="Escalated" value={to("?state=escalated", byState.escalated)} />
      <Figure label="Waiting" value={to("?state=waiting", byState.waiting)} note="set aside until a time" />
      <Figure
        label="Decided today"
        value={decidedToday}
        note={`of ${dailyCapacity} a day, ${Math.round((decidedToday / dailyCapacity) * 100)} %`}
      />
    </FigureRow>
  );
}
