import { CONFIDENCE_WORDS, TYPOLOGY_WORDS, VERDICT_WORDS } from "../words";
import type { Act } from "./desk-state";
import type { Finding } from "./marker";

/** "fraudulent, sure: card details theft". */
export function findingWords({ verdict, confidence, typology }: Finding): string {
  const words = `${VERDICT_WORDS[verdict].toLowerCase()}, ${CONFIDENCE_WORDS[confidence]}`;
  return typology ? `${words}: ${TYPOLOGY_WORDS[typology].toLowerCase()}` : words;
}

/** What was done, after "Case 1041 is": "decided fraudulent, sure: card details theft, with 2 others". */
export function actLine(act: Act): string {
  if (act.kind === "escalation") return "escalated";
  if (act.kind === "waiting") return "set aside";
  const along = act.together.length;
  const others = along === 0 ? "" : along === 1 ? ", with 1 other" : `, with ${along} others`;
  return `decided ${findingWords(act.finding)}${others}`;
}
