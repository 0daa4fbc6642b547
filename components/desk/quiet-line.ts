import { useCallback, useState } from "react";

/** One line at the foot of the Desk that says what happened; `count` makes a repeated text news again. */
export type QuietLine = { text: string; failed: boolean; count: number };

export type Say = (text: string, failed?: boolean) => void;

export function useQuietLine(): [QuietLine, Say] {
  const [line, setLine] = useState<QuietLine>({ text: "", failed: false, count: 0 });
  const say = useCallback<Say>((text, failed = false) => {
    setLine(({ count }) => ({ text, failed, count: count + 1 }));
  }, []);
  return [line, say];
}
