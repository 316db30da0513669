/** A sheet of paper, upright or lying. */
export interface Paper {
  widthMm: number;
  heightMm: number;
}

/** Trimmed sizes, upright. A: ISO 216; letter and legal: ANSI/ASME Y14.1. */
export const papers: Readonly<Record<string, Paper>> = {
  a5: { widthMm: 148, heightMm: 210 },
  a4: { widthMm: 210, heightMm: 297 },
  a3: { widthMm: 297, heightMm: 420 },
  a2: { widthMm: 420, heightMm: 594 },
  letter: { widthMm: 215.9, heightMm: 279.4 },
  legal: { widthMm: 215.9, heightMm: 355.6 },
};

const shortestEdgeMm = 60;
const longestEdgeMm = 2000;

/**
 * Reads a paper's name or its size.
 * @param text such as `A4`, `letter` or `200x250` (millimetres, width first)
 * @returns the sheet, or null where the text is none or the sheet is shorter than 60 or longer than 2000 mm
 */
export function readPaper(text: string): Paper | null {
  const name = text.trim().toLowerCase();
  if (Object.hasOwn(papers, name)) return papers[name];
  const edges = /^(\d+(?:\.\d+)?)\s*[x×]\s*(\d+(?:\.\d+)?)(?:\s*mm)?$/.exec(name);
  if (!edges) return null;
  const paper = { widthMm: Number(edges[1]), heightMm: Number(edges[2]) };
  const fits = (edgeMm: number) => edgeMm >= shortestEdgeMm && edgeMm <= longestEdgeMm;
  return fits(paper.widthMm) && fits(paper.heightMm) ? paper : null;
}

/** The same sheet lying on its long edge. */
export function lying({ widthMm, heightMm }: Paper): Paper {
  return { widthMm: Math.max(widthMm, heightMm), heightMm: Math.min(widthMm, heightMm) };
}
