import { toRoman } from './roman.ts';

/** What a picture is painted by, for people: a preset's title and the number of its state. */
export interface LookName {
  readonly title: string;
  /** Null where the state is on no shelf. */
  readonly stateNumber: number | null;
  /** Parameters were changed over that state. */
  readonly isChanged: boolean;
}

/** As under a print: `Low Water · II, with changes`. */
export function lookCaption({ title, stateNumber, isChanged }: LookName): string {
  const words = stateNumber === null ? title : `${title} · ${toRoman(stateNumber)}`;
  return isChanged ? `${words}, with changes` : words;
}
