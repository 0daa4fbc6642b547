/** What the floor's list of cases can be sorted by. */
export const FLOOR_SORTS = ["due", "opened", "amount", "hold", "number"] as const;
export type FloorSort = (typeof FLOOR_SORTS)[number];

export const DIRECTIONS = ["ascending", "descending"] as const;

/** Narrows the list to cases that need a look. */
export const FLOOR_CONCERNS = ["overdue", "expiring"] as const;
