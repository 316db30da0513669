import { sentenceOfDifferences } from '../../core/presets/differences.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import type { Delivery } from '../../core/recipes/recipe.ts';
import type { Look } from '../state/lookStore.ts';

/** What a state changed of the one it follows, in a sentence. */
export function sentenceOfState(state: State, states: readonly State[]): string {
  if (state.parent === null) return 'Where this preset began.';
  const parent = states.find(({ id }) => id === state.parent);
  if (!parent) return 'It follows a state of another photograph.';
  const sentence = sentenceOfDifferences(fullParameters(parent.parameters), fullParameters(state.parameters));
  if (sentence === 'Nothing changed.') return `The same as State ${toRoman(parent.number)}.`;
  return keepTogether(sentence);
}

/** When it was kept, as people say it. */
export function timeInWords(time: string, now = new Date()): string {
  if (time === '') return 'as it comes with Oxgall';
  const then = new Date(time);
  const clock = then.toLocaleTimeString('en-GB', { hour: '2-digit', minute: '2-digit' });
  const days = Math.round((dayOf(now) - dayOf(then)) / 86_400_000);
  if (days === 0) return `today at ${clock}`;
  if (days === 1) return `yesterday at ${clock}`;
  const weekday = then.toLocaleDateString('en-GB', { weekday: 'long' });
  if (days > 1 && days < 7) return `${weekday} at ${clock}`;
  const day = then.toLocaleDateString('en-GB', { day: 'numeric', month: 'long', year: 'numeric' });
  return `${day}, ${clock}`;
}

function dayOf(date: Date): number {
  return Date.UTC(date.getFullYear(), date.getMonth(), date.getDate());
}

/** What lies on the easel beyond its state. */
export function sentenceOfUnkept({ presetParameters, parameters }: Look): string {
  return keepTogether(sentenceOfDifferences(presetParameters, parameters));
}

/** When a state was delivered, and whether the same pixels went out before. */
export function wordsOfDelivery(delivery: Delivery, state: State, all: readonly Delivery[]): string {
  const { pixelsSha256, time, engineVersion } = delivery;
  const engine = engineVersion === state.engineVersion ? '' : ` by engine ${engineVersion}`;
  const earlier = all.find(
    (other) => other.time < time && pixelsSha256 !== undefined && other.pixelsSha256 === pixelsSha256,
  );
  const same = earlier ? `, pixel for pixel as ${earlier.path}` : '';
  return `delivered ${timeInWords(time)}${engine}${same}`;
}

/** Keeps a number and its unit on one line. */
function keepTogether(sentence: string): string {
  return sentence.replaceAll(/(\d) (mm|px|%|‰)/g, '$1\u00a0$2');
}
