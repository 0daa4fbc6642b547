import type { CSSProperties } from "react";

// No colours of ours: the mail program's own pair is legible in its light and in its dark theme, and stays a pair.
export const styles = {
  body: { margin: 0, fontFamily: "'Source Sans 3', 'Segoe UI', Helvetica, Arial, sans-serif" },
  container: { maxWidth: "560px", padding: "16px" },
  title: { fontSize: "22px", lineHeight: "28px", margin: "8px 0 4px" },
  heading: { fontSize: "16px", lineHeight: "22px", margin: "20px 0 4px" },
  text: { fontSize: "15px", lineHeight: "22px", margin: "4px 0" },
  note: { fontSize: "13px", lineHeight: "18px", margin: "0 0 4px" },
  value: { fontSize: "15px", lineHeight: "22px", margin: "4px 0 0", fontWeight: 700 },
  caution: { fontSize: "15px", lineHeight: "22px", margin: "12px 0", fontWeight: 700 },
  link: { color: "inherit", textDecoration: "underline" },
  rule: { borderColor: "currentColor", margin: "20px 0 12px" },
} satisfies Record<string, CSSProperties>;

/** Tells mail programs that they may use either theme. */
export const bothThemes = ":root { color-scheme: light dark; supported-color-schemes: light dark; }";
