/** By ISO weekday, 1 = Monday. */
export const WEEKDAY_WORDS: Readonly<Record<number, string>> = {
  1: "Monday",
  2: "Tuesday",
  3: "Wednesday",
  4: "Thursday",
  5: "Friday",
  6: "Saturday",
  7: "Sunday",
};

export const hourWords = (hour: number): string => `${String(hour).padStart(2, "0")}:00`;
