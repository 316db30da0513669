import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { canonicalJson } from '../../core/recipes/canonicalJson.ts';
import { contentId, sha256Hex } from '../../core/recipes/contentId.ts';
import { publishedPairs, rfc8785NumberSamples } from './rfc8785Vectors.ts';

function doubleFromBits(bits: string): number {
  const view = new DataView(new ArrayBuffer(8));
  view.setBigUint64(0, BigInt(`0x${bits}`));
  return view.getFloat64(0);
}

describe('canonical JSON', () => {
  it.each(rfc8785NumberSamples)('spells the double %s as %s (RFC 8785, appendix B)', (bits, text) => {
    expect(canonicalJson(doubleFromBits(bits))).toBe(text);
  });

  it.each([['7fffffffffffffff'], ['7ff0000000000000'], ['fff0000000000000']])(
    'refuses the double %s (RFC 8785, appendix B: not a number, infinity)',
    (bits) => {
      expect(() => canonicalJson(doubleFromBits(bits))).toThrow(TypeError);
    },
  );

  it.each(publishedPairs)('$source', ({ input, output }) => {
    expect(canonicalJson(JSON.parse(input))).toBe(output);
  });

  it('gives the UTF-8 bytes of RFC 8785, section 3.2.4', () => {
    const hex = [
      '7b226c69746572616c73223a5b6e756c6c2c747275652c66616c73655d2c226e756d62657273223a5b3333333333333333332e',
      '333333333333332c31652b33302c342e352c302e3030322c31652d32375d2c22737472696e67223a22e282ac245c75303030665c',
      '6e4127425c225c5c5c5c5c222f227d',
    ].join('');
    const text = canonicalJson(JSON.parse(publishedPairs[0].input));
    expect(Buffer.from(text, 'utf8').toString('hex')).toBe(hex);
  });

  it('refuses half a surrogate pair, in values and in keys (RFC 8785, section 3.2.2.2)', () => {
    expect(() => canonicalJson(['\ud83d'])).toThrow(/well-formed/);
    expect(() => canonicalJson({ '\ude02': 1 })).toThrow(/well-formed/);
    expect(canonicalJson('\ud83d\ude02')).toBe('"\ud83d\ude02"');
  });

  it.each([[() => 1], [Symbol('ink')], [10n], [undefined], [[undefined]]])('refuses %s', (value) => {
    expect(() => canonicalJson(value)).toThrow(TypeError);
  });

  it('refuses a value that contains itself instead of running out of stack', () => {
    const loop: Record<string, unknown> = {};
    loop.again = loop;
    expect(() => canonicalJson(loop)).toThrow(/nesting/);
  });

  it('keeps a field named __proto__', () => {
    expect(canonicalJson(JSON.parse('{"__proto__":{"a":1},"a":2}'))).toBe('{"__proto__":{"a":1},"a":2}');
  });

  it('is a fixed point: parsing the text and writing it again changes nothing', () => {
    fc.assert(
      fc.property(fc.jsonValue({ maxDepth: 5 }), (value) => {
        fc.pre(isWellFormed(value));
        const text = canonicalJson(value);
        expect(canonicalJson(JSON.parse(text))).toBe(text);
        // Parsing turns −0 into 0 in canonical text, which compares equal only after the same spelling.
        expect(JSON.parse(text)).toEqual(JSON.parse(JSON.stringify(value)));
      }),
      { numRuns: 500 },
    );
  });

  it('does not depend on the order of keys', () => {
    fc.assert(
      fc.property(fc.dictionary(fc.string(), fc.integer()), fc.nat(), (fields, turn) => {
        const entries = Object.entries(fields);
        const at = entries.length === 0 ? 0 : turn % entries.length;
        const turned = Object.fromEntries([...entries.slice(at), ...entries.slice(0, at)].reverse());
        expect(canonicalJson(turned)).toBe(canonicalJson(fields));
      }),
    );
  });
});

function isWellFormed(value: unknown): boolean {
  return !/\\ud[89a-f]/i.test(JSON.stringify(value));
}

describe('SHA-256', () => {
  // FIPS 180-4 with the example values NIST publishes for it (one block, two blocks, one million letters a).
  it.each([
    ['abc', 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad'],
    ['', 'e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855'],
    [
      'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq',
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    ],
    ['a'.repeat(1_000_000), 'cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0'],
  ])('of a published message', (message, digest) => {
    expect(sha256Hex(message)).toBe(digest);
  });

  it('agrees with OpenSSL on any bytes', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 300 }), (bytes) => {
        expect(sha256Hex(bytes)).toBe(createHash('sha256').update(bytes).digest('hex'));
      }),
    );
  });
});

describe('content ids', () => {
  it('do not depend on key order, white space or the spelling of numbers', () => {
    const spellings = [
      '{"body.brush":"4.5mm","body.hold":0.25,"body.coats":2}',
      '{ "body.coats": 2.0, "body.hold": 2.5e-1,\n "body.brush": "4.5mm" }',
      '{"body.hold":0.250,"body.brush":"4\\u002e5mm","body.coats":20e-1}',
    ];
    const ids = spellings.map((text) => contentId(JSON.parse(text)));
    // printf '{"body.brush":"4.5mm","body.coats":2,"body.hold":0.25}' | sha256sum
    expect(new Set(ids)).toEqual(
      new Set(['76a48f1683c5c1b652cad8200decdf136ebd59cd3f4ca5d43c82193fc04ee7b4']),
    );
  });
});
