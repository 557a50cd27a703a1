import tds from 'epc-tds';

/** The shortest EPC has 96 bits; shorter hex may be a mark and number that happens to be hex. */
const SHORTEST_HEX = 24;

function fromHex(hex: string): string | null {
  const epc = tds.valueOf(hex);
  const digits = Math.ceil(epc.getTotalBits() / 8) * 2;
  if (hex.length < digits || /[^0]/.test(hex.slice(digits))) return null;
  // An invalid partition shows only when the parts are asked for.
  epc.toTagURI();
  return hex.slice(0, digits);
}

function fromTagUri(uri: string): string | null {
  const epc = tds.fromTagURI(uri);
  return epc.toTagURI() === uri ? epc.toHexString().toUpperCase() : null;
}

/**
 * The one form under which an EPC is stored and compared: its upper-case hex without the zeros
 * that readers pad it with. Takes hex (spaces around it allowed) or an `urn:epc:tag:` URI; null
 * for anything that is no EPC by the GS1 Tag Data Standard. Never throws.
 */
export function canonicalEpc(text: string): string | null {
  const trimmed = text.trim();
  try {
    if (trimmed.startsWith('urn:epc:tag:')) return fromTagUri(trimmed);
    if (trimmed.length < SHORTEST_HEX || !/^[0-9A-Fa-f]+$/.test(trimmed)) return null;
    return fromHex(trimmed.toUpperCase());
  } catch {
    // epc-tds throws on unknown headers, invalid partitions and malformed URIs alike.
    return null;
  }
}
