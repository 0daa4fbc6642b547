import type { CSSProperties } from "react";

const ink = "#1f1d1a";
const soft = "#57534c";
const ground = "#f6f3ee";
const accent = "#1f4f86";
const family = "'Source Sans 3', 'Segoe UI', Helvetica, Arial, sans-serif";

export const styles = {
  body: { margin: 0, backgroundColor: ground, color: ink, fontFamily: family },
  container: { maxWidth: "560px", padding: "16px" },
  title: { fontSize: "22px", lineHeight: "28px", margin: "8px 0 4px" },
  heading: { fontSize: "16px", lineHeight: "22px", margin: "20px 0 4px" },
  text: { fontSize: "15px", lineHeight: "22px", margin: "4px 0" },
  note: { fontSize: "13px", lineHeight: "18px", margin: "0 0 4px", color: soft },
  value: { fontSize: "15px", lineHeight: "22px", margin: "4px 0 0", fontWeight: 700 },
  caution: { fontSize: "15px", lineHeight: "22px", margin: "12px 0", fontWeight: 700 },
  link: { color: accent, textDecoration: "underline" },
  rule: { borderColor: "#cfc8bc", margin: "20px 0 12px" },
} satisfies Record<string, CSSProperties>;

/** Clients that choose dark colours by themselves keep the contrast; those that ask get a pair of ours. */
export const darkStyles = `
:root { color-scheme: light dark; supported-color-schemes: light dark; }
@media (prefers-color-scheme: dark) {
  .ground { background-color: #1b1a18 !important; color: #ece7df !important; }
  .ink { color: #ece7df !important; }
  .soft { color: #b8b1a6 !important; }
  .accent { color: #9cc4f2 !important; }
}`;
