/** All invented: no such institution, town or merchant is known to us. */
export const INSTITUTION = "Brackwater Mutual";

export const MERCHANTS = [
  { name: "Tarnholt Grocers", mcc: "5411", medianMinor: 3_200 },
  { name: "Ostermere Pantry", mcc: "5411", medianMinor: 2_400 },
  { name: "Fennick & Daughters Bakery", mcc: "5462", medianMinor: 900 },
  { name: "Quillmoor Fuel", mcc: "5542", medianMinor: 5_800 },
  { name: "Saltgate Ferries", mcc: "4111", medianMinor: 1_900 },
  { name: "Larkspur Row Pharmacy", mcc: "5912", medianMinor: 1_700 },
  { name: "The Copper Newt", mcc: "5812", medianMinor: 4_100 },
  { name: "Windle Books", mcc: "5942", medianMinor: 2_600 },
  { name: "Hob & Hearth", mcc: "5712", medianMinor: 14_500 },
  { name: "Pellworth Gardens", mcc: "5261", medianMinor: 4_700 },
  { name: "Ashcombe Cycles", mcc: "5940", medianMinor: 11_000 },
  { name: "Nettlecombe Vets", mcc: "0742", medianMinor: 7_800 },
  { name: "Brindle Lane Cinema", mcc: "7832", medianMinor: 2_200 },
  { name: "Marrow Hill Rail", mcc: "4112", medianMinor: 3_600 },
] as const;

export const REMOTE_MERCHANTS = [
  { name: "Voltkiste Electronics", mcc: "5732", medianMinor: 21_000 },
  { name: "Parcelwren", mcc: "5964", medianMinor: 4_400 },
  { name: "Tuppence Tickets", mcc: "7922", medianMinor: 6_300 },
  { name: "Moonlark Music", mcc: "5815", medianMinor: 1_100 },
  { name: "Gannet Air", mcc: "4511", medianMinor: 18_500 },
  { name: "Threadneap Clothing", mcc: "5691", medianMinor: 5_900 },
  { name: "Glimmerpost Jewels", mcc: "5944", medianMinor: 26_000 },
  { name: "Cardamom Gift Vouchers", mcc: "5947", medianMinor: 5_000 },
] as const;

export const PAYEES = [
  "Tarnholt Water",
  "Ostermere Borough",
  "Halyard Energy",
  "Dovecote Lettings",
  "Brackwater Mutual Savings",
  "Pike & Rushen Solicitors",
  "Saltgate Nursery School",
  "Merle Insurance Pool",
] as const;

/** Countries of the scenario, the account's own first; codes of ISO 3166-1. */
export const COUNTRIES = ["IE", "FR", "PT", "NL", "ES"] as const;
