/** A whole number in groups of three, as amounts are written: 12000 → "12 000". */
export const countText = (count: number): string => String(count).replace(/\B(?=(\d{3})+(?!\d))/g, "\u202f");
