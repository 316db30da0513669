import { parentPort } from 'node:worker_threads';
import { ColourEngine } from './colourEngine.ts';
import type { ColourAnswer, ColourQuestion } from './colourThread.ts';
import { finishPixels } from './finishPixels.ts';
import { gamutTable } from './gamutTable.ts';
import { screenTable } from './screenTable.ts';

/** One question after another, each answered under its number. */
const engine = ColourEngine.load();

parentPort?.on('message', (question: ColourQuestion) => {
  void engine.then((loaded) => answer(loaded, question)).catch((failure) => refuse(question.id, failure));
});

function answer(loaded: ColourEngine, question: ColourQuestion): void {
  const { id } = question;
  const result = compute(loaded, question);
  parentPort?.postMessage({ id, result } satisfies ColourAnswer, buffersOf(result));
}

/** What lies in shared memory cannot be handed over, nor need it be. */
function buffersOf(result: ReturnType<typeof compute>): ArrayBuffer[] {
  if (result === null || typeof result === 'string') return [];
  const { buffer } = 'pixels' in result ? result.pixels : result;
  return buffer instanceof ArrayBuffer ? [buffer] : [];
}

function compute(loaded: ColourEngine, question: ColourQuestion) {
  switch (question.kind) {
    case 'finish':
      return finishPixels(loaded, question.job);
    case 'spaceOf':
      return loaded.spaceOf(question.profile);
    case 'gamut':
      return gamutTable(loaded, question.from, question.print);
    case 'screen':
      return screenTable(loaded, question.profile, question.screen);
  }
}

function refuse(id: number, failure: unknown): void {
  const problem = failure instanceof Error ? failure.message : String(failure);
  parentPort?.postMessage({ id, problem } satisfies ColourAnswer);
}
