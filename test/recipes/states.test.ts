import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import { makeState, type StateContent, stateIdOf } from '../../core/presets/state.ts';
import { appendState, mergeThreads, partings, threadFaults } from '../../core/presets/thread.ts';
import { canonicalJson } from '../../core/recipes/canonicalJson.ts';

/** Ids made by Python's json and hashlib, not by us; see SOURCES.md beside them. */
const known: { content: StateContent; canonical: string; id: string }[] = JSON.parse(
  readFileSync(new URL('../fixtures/recipes/state-ids.json', import.meta.url), 'utf8'),
);

const content = (note: string, parent: string | null = null): StateContent => ({
  parameters: defaultParameters(),
  engineVersion: '1',
  note,
  time: '2031-04-05T06:07:08.000Z',
  parent,
});

describe('states', () => {
  it.each(known)('bears the id another implementation gave it: $id', (fixture) => {
    expect(canonicalJson(fixture.content)).toBe(fixture.canonical);
    expect(makeState(fixture.content, 1).id).toBe(fixture.id);
  });

  it('bears an id that does not depend on its number or on the order of its keys', () => {
    fc.assert(
      fc.property(
        fc.shuffledSubarray(Object.keys(known[1].content), { minLength: 5 }),
        fc.nat(),
        (keys, number) => {
          const shuffled = Object.fromEntries(
            keys.map((key) => [key, known[1].content[key as keyof StateContent]]),
          );
          expect(stateIdOf({ ...(shuffled as unknown as StateContent), number })).toBe(known[1].id);
        },
      ),
    );
  });

  it.each([
    ['note', { note: 'other' }],
    ['engine version', { engineVersion: '2' }],
    ['time', { time: '2031-04-05T06:07:08.001Z' }],
    ['parent', { parent: known[0].id }],
    ['parameters', { parameters: { ...defaultParameters(), 'body.coats': 3 } }],
    ['field of a later version', { later: true }],
  ])('gets another id with another %s', (_, change) => {
    expect(makeState({ ...content('a'), ...change }, 1).id).not.toBe(makeState(content('a'), 1).id);
  });
});

describe('threads', () => {
  it('number on, and keep two states that agree in everything', () => {
    const one = appendState([], content('a'));
    const two = appendState(one.states, content('a'));
    expect(two.states.map((state) => state.number)).toEqual([1, 2]);
    expect(two.state.id).not.toBe(one.state.id);
    expect(two.state.time).toBe('2031-04-05T06:07:08.001Z');
    expect(one.states).toHaveLength(1);
  });

  it('merge to hold every state of both, ours first', () => {
    const shared = appendState([], content('shared'));
    const ours = appendState(shared.states, content('ours', shared.state.id));
    const theirs = appendState(shared.states, content('theirs', shared.state.id));
    const merged = mergeThreads(ours.states, theirs.states);
    expect(merged.map(({ number, note }) => [number, note])).toEqual([
      [1, 'shared'],
      [2, 'ours'],
      [3, 'theirs'],
    ]);
    expect(threadFaults(merged)).toEqual([]);
    expect(mergeThreads(merged, theirs.states)).toEqual(merged);
  });

  it('name the branches where a state has two followers', () => {
    const one = appendState([], content('one'));
    const two = appendState(one.states, content('two', one.state.id));
    const three = appendState(two.states, content('three', two.state.id));
    const four = appendState(three.states, content('four', one.state.id));
    expect(partings(three.states)).toEqual([]);
    const [parting, ...others] = partings(four.states, { [four.state.id]: { branch: 'For the cover' } });
    expect(others).toEqual([]);
    expect(parting.from.number).toBe(1);
    expect(parting.followers.map(({ state, branch }) => [state.number, branch])).toEqual([
      [2, 'I a'],
      [4, 'For the cover'],
    ]);
  });

  it('tell which state was changed outside, is out of place or hangs in the air', () => {
    const one = appendState([], content('one'));
    const two = appendState(one.states, content('two', one.state.id));
    const [first, second] = two.states;
    const problems = (states: typeof two.states) => threadFaults(states).map((fault) => fault.problem);
    expect(problems(two.states)).toEqual([]);
    expect(problems([first, { ...second, note: 'prettier' }])).toEqual([
      'State II is not what it was when it was kept: it was changed outside Oxgall',
    ]);
    expect(problems([second])).toEqual([
      'State II stands in place 1',
      'State II follows a state that is not there',
    ]);
    expect(problems([first, { ...first, number: 2 }])).toEqual(['State II is there twice']);
  });
});
