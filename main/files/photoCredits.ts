/** Who made a photo and who holds its rights, as its file says outside of EXIF. */
export interface PhotoCredits {
  creator?: string;
  copyright?: string;
}

/**
 * Reads the creator and the copyright notice from XMP (ISO 16684-1, the Dublin Core schema) and, where that has none,
 * from IPTC (IIM 4, datasets 2:80 and 2:116).
 */
export function creditsOf(xmp: Uint8Array | undefined, iptc: Uint8Array | undefined): PhotoCredits {
  const text = xmp ? Buffer.from(xmp).toString('utf8') : '';
  return {
    creator: listedIn(text, 'creator') ?? datasetIn(iptc, 80),
    copyright: listedIn(text, 'rights') ?? datasetIn(iptc, 116),
  };
}

/** All items of a Dublin Core property; a text in many languages is taken in its default, which stands first. */
function listedIn(xmp: string, property: 'creator' | 'rights'): string | undefined {
  const body = new RegExp(`<dc:${property}\\b[^>]*>([\\s\\S]*?)</dc:${property}>`).exec(xmp)?.[1];
  const items = [...(body ?? '').matchAll(/<rdf:li\b[^>]*>([\s\S]*?)<\/rdf:li>/g)].map((item) =>
    unescaped(item[1]).trim(),
  );
  const found = items.filter(Boolean);
  if (found.length === 0) return undefined;
  return property === 'rights' ? found[0] : found.join('; ');
}

const entities: Record<string, string> = { amp: '&', lt: '<', gt: '>', quot: '"', apos: "'" };

function unescaped(text: string): string {
  return text.replace(/&(?:#(\d+)|#x([0-9a-f]+)|(\w+));/gi, (whole, decimal, hexadecimal, name) => {
    if (name) return entities[name.toLowerCase()] ?? whole;
    const code = decimal ? Number(decimal) : Number.parseInt(hexadecimal, 16);
    return code <= 0x10ffff ? String.fromCodePoint(code) : whole;
  });
}

const tagMarker = 0x1c;
const applicationRecord = 2;
/** Dataset 1:90 with this value says that texts are UTF-8. */
const utf8Mark = Buffer.from([tagMarker, 1, 90, 0, 3, 0x1b, 0x25, 0x47]);

function datasetIn(iptc: Uint8Array | undefined, dataset: number): string | undefined {
  if (!iptc) return undefined;
  const bytes = Buffer.from(iptc.buffer, iptc.byteOffset, iptc.byteLength);
  const at = bytes.indexOf(Buffer.from([tagMarker, applicationRecord, dataset]));
  if (at < 0 || at + 5 > bytes.length) return undefined;
  const length = bytes.readUInt16BE(at + 3);
  const text = bytes.subarray(at + 5, at + 5 + length);
  const isWhole = length < 0x8000 && text.length === length;
  if (!isWhole) return undefined;
  return text.toString(bytes.includes(utf8Mark) ? 'utf8' : 'latin1').trim() || undefined;
}
