/**
 * Attributes of a person that are never a signal: those that equality law protects (such as Directives 2000/43/EC,
 * 2000/78/EC and 2004/113/EC of the EU) and the special categories of Article 9 of Regulation (EU) 2016/679.
 * A list of words cannot catch every alias; it stops the plain attempt, and two persons read every formula.
 */
const PROTECTED_WORDS: Readonly<Record<string, string>> = {
  birth: "age",
  birthday: "age",
  birthdate: "age",
  birthyear: "age",
  dob: "age",
  elderly: "age",
  sex: "sex",
  sexual: "sexual orientation",
  sexuality: "sexual orientation",
  gender: "gender",
  male: "gender",
  female: "gender",
  salutation: "gender",
  ethnic: "ethnicity",
  ethnicity: "ethnicity",
  race: "race",
  racial: "race",
  skin: "race",
  caste: "ethnicity",
  tribe: "ethnicity",
  ancestry: "ethnicity",
  religion: "religion",
  religious: "religion",
  faith: "religion",
  belief: "religion",
  church: "religion",
  philosophy: "belief",
  health: "health",
  medical: "health",
  illness: "health",
  disease: "health",
  diagnosis: "health",
  pregnant: "pregnancy",
  pregnancy: "pregnancy",
  maternity: "pregnancy",
  disability: "disability",
  disabled: "disability",
  handicap: "disability",
  nationality: "nationality",
  citizen: "nationality",
  citizenship: "nationality",
  immigrant: "nationality",
  migrant: "nationality",
  refugee: "nationality",
  birthplace: "nationality",
  political: "political opinion",
  tradeunion: "trade union membership",
  politics: "political opinion",
  genetic: "genetic data",
  biometric: "biometric data",
  marital: "marital status",
  married: "marital status",
};

/** Words that say what has the age, where it is not a person. */
const THINGS_WITH_AGE = [
  "account",
  "card",
  "device",
  "token",
  "session",
  "terminal",
  "merchant",
  "counterparty",
  "relationship",
  "email",
  "phone",
  "sim",
  "address",
  "mandate",
  "payee",
];

/** What a field's name says of a person that must not count, or null; `customerAge`, `customer_age` and `AGE` alike. */
export function protectedAttribute(name: string): string | null {
  const words = wordsOf(name);
  for (const [i, word] of words.entries()) {
    if (Object.hasOwn(PROTECTED_WORDS, word)) return PROTECTED_WORDS[word] as string;
    const isAge = word === "age" || word === "aged" || word === "ages";
    if (isAge && !THINGS_WITH_AGE.includes(words[i - 1] ?? "")) return "age";
  }
  // Written without anything between: the longer words only, since short ones lie within others.
  const run = words.join("");
  for (const [word, of] of Object.entries(PROTECTED_WORDS)) {
    if (word.length >= 8 && run.includes(word)) return of;
  }
  return null;
}

/** In the order of the catalogue's words, for the page that says so. */
export const PROTECTED_ATTRIBUTES: readonly string[] = [...new Set(Object.values(PROTECTED_WORDS))];

function wordsOf(name: string): string[] {
  return name
    .replace(/([a-z0-9])([A-Z])/g, "$1 $2")
    .replace(/([A-Z])([A-Z][a-z])/g, "$1 $2")
    .toLowerCase()
    .split(/[^a-z]+/)
    .filter((word) => word !== "");
}
