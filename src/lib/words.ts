const kinds: Record<string, [one: string, many: string]> = {
  car: ['car', 'cars'],
  locomotive: ['locomotive', 'locomotives'],
  container: ['box', 'boxes'],
  trailer: ['trailer', 'trailers'],
  chassis: ['chassis', 'chassis'],
  generatorSet: ['generator set', 'generator sets'],
  endOfTrain: ['end-of-train device', 'end-of-train devices'],
  other: ['other', 'others'],
};

/** The floor's word for a kind of the contract: "box" for container. */
export const sayKind = (kind: string, n = 1): string =>
  (kinds[kind] ?? [kind, kind])[n === 1 ? 0 : 1];

/** Kinds in the order that lists of choices show them. */
export const kindNames = Object.keys(kinds);

/** "1 car", "430 cars", "1,204 cars". */
export const counted = (n: number, one: string, many: string): string =>
  `${n.toLocaleString('en-US')} ${n === 1 ? one : many}`;

/** "Alder Bend, Cairn Junction and Wickett Line". */
export const listed = (words: string[], join = 'and'): string =>
  words.length < 2
    ? (words[0] ?? '')
    : `${words.slice(0, -1).join(', ')} ${join} ${words[words.length - 1]}`;

/** First letter large, for the head of a sentence. */
export const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);

/** "Entries by the south lead are not seen": what leads without a reader keep from view. */
export const sayUnseenLeads = (names: string[]): string =>
  `Entries by ${listed(names.map((name) => `the ${uncapital(name)}`))} are not seen`;

/** A name in the middle of a sentence; "N2 lead" keeps its letter. */
const uncapital = (text: string): string =>
  /^\p{Lu}\p{Ll}/u.test(text) ? text.charAt(0).toLowerCase() + text.slice(1) : text;
