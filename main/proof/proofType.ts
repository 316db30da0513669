import * as fontkit from 'fontkit';
import { type FaceName, styleTable, type TypeMeasure, type TypeStyle } from '../../core/proof/proofPage.ts';
import { faceFiles } from './faceFiles.ts';

/** Characters that one font sets. */
export interface TypeRun {
  /** Key of the font; see `fontBytes`. */
  font: string;
  text: string;
  widthPt: number;
}

interface LoadedFont {
  key: string;
  bytes: Buffer;
  font: fontkit.Font;
}

/** The type of the sheet: measures, cuts texts into runs of one font, and draws outlines. */
export class ProofType implements TypeMeasure {
  readonly #faces: Record<FaceName, LoadedFont[]>;
  readonly #widths = new Map<string, number>();

  constructor() {
    const faces = Object.entries(faceFiles).map(([face, files]) => [
      face,
      files.map((file, k) => loadFont(`${face}-${k}`, file)),
    ]);
    this.#faces = Object.fromEntries(faces) as Record<FaceName, LoadedFont[]>;
  }

  /** The font files by their keys. */
  fontBytes(): Map<string, Buffer> {
    return new Map(
      Object.values(this.#faces).flatMap((fonts) => fonts.map(({ key, bytes }) => [key, bytes])),
    );
  }

  widthPt(text: string, style: TypeStyle): number {
    const key = `${style}\n${text}`;
    const known = this.#widths.get(key);
    if (known !== undefined) return known;
    const widthPt = this.runs(text, style).reduce((sumPt, run) => sumPt + run.widthPt, 0);
    this.#widths.set(key, widthPt);
    return widthPt;
  }

  /** Cuts a text where the font changes; a character that no font has goes to the first, which draws a box. */
  runs(text: string, style: TypeStyle): TypeRun[] {
    const { face, sizePt } = styleTable[style];
    const pieces: { loaded: LoadedFont; text: string }[] = [];
    for (const character of text) {
      const loaded = this.#fontFor(character, face, pieces.at(-1)?.loaded);
      const last = pieces.at(-1);
      if (last?.loaded === loaded) last.text += character;
      else pieces.push({ loaded, text: character });
    }
    return pieces.map(({ loaded, text: piece }) => {
      const { advanceWidth } = loaded.font.layout(piece);
      return { font: loaded.key, text: piece, widthPt: (advanceWidth / loaded.font.unitsPerEm) * sizePt };
    });
  }

  /** Whether the sheet's fonts have every character. */
  hasAll(text: string, style: TypeStyle): boolean {
    const fonts = this.#faces[styleTable[style].face];
    return [...text].every((character) => fonts.some((loaded) => has(loaded, character)));
  }

  /** The outlines of a text on its baseline, as SVG path elements. */
  outlines(text: string, style: TypeStyle, xPt: number, baselinePt: number): string {
    const { sizePt, colour, face } = styleTable[style];
    const paths: string[] = [];
    let leftPt = xPt;
    for (const run of this.runs(text, style)) {
      const { font } = this.#faces[face].find(({ key }) => key === run.font)!;
      const scale = sizePt / font.unitsPerEm;
      const { glyphs, positions } = font.layout(run.text);
      let penUnits = 0;
      glyphs.forEach((glyph, k) => {
        const { xAdvance, xOffset, yOffset } = positions[k];
        const x = leftPt + (penUnits + xOffset) * scale;
        const y = baselinePt - yOffset * scale;
        const outline = glyph.path.toSVG();
        if (outline)
          paths.push(
            `<path fill="${colour}" transform="matrix(${scale} 0 0 ${-scale} ${x} ${y})" d="${outline}"/>`,
          );
        penUnits += xAdvance;
      });
      leftPt += run.widthPt;
    }
    return paths.join('');
  }

  /** The font in use goes on as long as it can: a space or a dot between two words changes no font. */
  #fontFor(character: string, face: FaceName, inUse: LoadedFont | undefined): LoadedFont {
    const fonts = this.#faces[face];
    if (inUse && inUse !== fonts[0] && !/[\p{L}\p{N}]/u.test(character) && has(inUse, character))
      return inUse;
    return fonts.find((loaded) => has(loaded, character)) ?? fonts[0];
  }
}

function has({ font }: LoadedFont, character: string): boolean {
  return font.hasGlyphForCodePoint(character.codePointAt(0)!);
}

function loadFont(key: string, dataUrl: string): LoadedFont {
  const bytes = Buffer.from(dataUrl.slice(dataUrl.indexOf(',') + 1), 'base64');
  const font = fontkit.create(bytes);
  if (!('layout' in font)) throw new TypeError(`Expected one font for ${key}, received a collection`);
  return { key, bytes, font };
}
