"use client";
import { useTheme } from "next-themes";
import { useSyncExternalStore } from "react";

const THEMES = { system: "As the system", light: "Light", dark: "Dark" } as const;

const nothing = () => () => {};
/** False in the server's markup, where the browser's stored choice is not known yet. */
const useInBrowser = () =>
  useSyncExternalStore(
    nothing,
    () => true,
    () => false,
  );

export function ThemeSwitch() {
  const { theme, setTheme } = useTheme();
  const inBrowser = useInBrowser();
  return (
    <select
      aria-label="Theme"
      value={inBrowser ? (theme ?? "system") : "system"}
      onChange={(event) => setTheme(event.target.value)}
      className="min-h-7 rounded-edge border border-transparent bg-paper text-small text-soft hover:border-edge hover:text-ink"
    >
      {Object.entries(THEMES).map(([value, name]) => (
        <option key={value} value={value}>
          {name}
        </option>
      ))}
    </select>
  );
}
