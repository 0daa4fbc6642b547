const RFC_3339 =
  /^(\d{4})-(\d{2})-(\d{2})[Tt](\d{2}):(\d{2}):(\d{2})(?:\.(\d{1,9}))?(?:[Zz]|([+-])(\d{2}):(\d{2}))$/;
const MINUTE_MS = 60_000;
const DAY_MS = 86_400_000;

/**
 * A time of RFC 3339 in milliseconds since 1970; null where it is none. A leap second (23:59:60 UTC) counts as the
 * second after it, since our clock has none; digits beyond milliseconds are cut.
 */
export function parseInstant(text: string): number | null {
  const match = RFC_3339.exec(text);
  if (!match) return null;
  const [year, month, day, hour, minute, second] = match.slice(1, 7).map(Number) as [
    number,
    number,
    number,
    number,
    number,
    number,
  ];
  const [offsetHours, offsetMinutes] = [Number(match[9] ?? 0), Number(match[10] ?? 0)];
  if (month < 1 || month > 12 || day < 1 || day > daysIn(year, month)) return null;
  if (hour > 23 || minute > 59 || second > 60 || offsetHours > 23 || offsetMinutes > 59) return null;
  const offsetMs = (match[8] === "-" ? -1 : 1) * (offsetHours * 60 + offsetMinutes) * MINUTE_MS;
  const date = new Date(0);
  date.setUTCFullYear(year, month - 1, day);
  date.setUTCHours(hour, minute, second, Number((match[7] ?? "").padEnd(3, "0").slice(0, 3)));
  const atMs = date.getTime() - offsetMs;
  if (second === 60 && Math.floor(atMs / 1_000) % (DAY_MS / 1_000) !== 0) return null;
  return atMs;
}

function daysIn(year: number, month: number): number {
  const isLeap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
  return month === 2 ? (isLeap ? 29 : 28) : [4, 6, 9, 11].includes(month) ? 30 : 31;
}
