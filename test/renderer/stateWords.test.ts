import { describe, expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import { makeState } from '../../core/presets/state.ts';
import type { Delivery } from '../../core/recipes/recipe.ts';
import { sentenceOfState, timeInWords, wordsOfDelivery } from '../../renderer/states/stateWords.ts';

const base = { engineVersion: '1', note: '', time: '' };
const first = makeState({ ...base, parameters: { ...defaultParameters() }, parent: null }, 1);
const follower = (changes: object, parent = first.id) =>
  makeState({ ...base, parameters: { ...defaultParameters(), ...changes }, parent }, 2);

const delivery = (path: string, hour: number, pixels: string | undefined, engineVersion = '1') =>
  ({
    path,
    time: `2031-04-05T0${hour}:00:00.000Z`,
    pixelsSha256: pixels,
    engineVersion,
  }) as Delivery;

describe('what a card says', () => {
  it('tells what a state changed, with numbers and units on one line', () => {
    expect(sentenceOfState(first, [first])).toBe('Where this preset began.');
    const changed = follower({ 'body.brush': '6mm' });
    expect(sentenceOfState(changed, [first, changed])).toMatch(/^Brush .* → 6\u00a0mm\.$/);
    const same = follower({});
    expect(sentenceOfState(same, [first, same])).toBe('The same as State I.');
    const stranger = follower({}, 'f'.repeat(64));
    expect(sentenceOfState(stranger, [first, stranger])).toBe('It follows a state of another photograph.');
  });

  it('says the day as people do', () => {
    const now = new Date(2031, 3, 5, 12, 0);
    const at = (day: number, hour: number) => timeInWords(new Date(2031, 3, day, hour, 5).toISOString(), now);
    expect(at(5, 9)).toBe('today at 09:05');
    expect(at(4, 23)).toBe('yesterday at 23:05');
    expect(at(1, 9)).toBe('Tuesday at 09:05');
    expect(timeInWords(new Date(2030, 11, 24, 8, 0).toISOString(), now)).toBe('24 December 2030, 08:00');
    expect(timeInWords('', now)).toBe('as it comes with Oxgall');
  });

  it('names the earlier file whose pixels a delivery has, and another engine', () => {
    const one = delivery('one.png', 6, 'a');
    const other = delivery('other.tif', 7, 'a', '2');
    const unlike = delivery('unlike.png', 8, 'b');
    const unknown = delivery('unknown.png', 9, undefined);
    const all = [one, other, unlike, unknown];
    expect(wordsOfDelivery(one, first, all)).not.toMatch(/pixel|engine/);
    expect(wordsOfDelivery(other, first, all)).toMatch(/ by engine 2, pixel for pixel as one\.png$/);
    expect(wordsOfDelivery(unlike, first, all)).not.toMatch(/pixel/);
    expect(wordsOfDelivery(unknown, first, all)).not.toMatch(/pixel/);
  });
});
