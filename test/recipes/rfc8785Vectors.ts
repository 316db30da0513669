/**
 * Published vectors of RFC 8785, JSON Canonicalization Scheme (A. Rundgren, B. Jordan, S. Erdtman, 2020), and
 * of the sample files its authors publish with it.
 */

/** Appendix B: IEEE 754 bits of a double, and its text. */
export const rfc8785NumberSamples: [bits: string, text: string][] = [
  ['0000000000000000', '0'],
  ['8000000000000000', '0'],
  ['0000000000000001', '5e-324'],
  ['8000000000000001', '-5e-324'],
  ['7fefffffffffffff', '1.7976931348623157e+308'],
  ['ffefffffffffffff', '-1.7976931348623157e+308'],
  ['4340000000000000', '9007199254740992'],
  ['c340000000000000', '-9007199254740992'],
  ['4430000000000000', '295147905179352830000'],
  ['44b52d02c7e14af5', '9.999999999999997e+22'],
  ['44b52d02c7e14af6', '1e+23'],
  ['44b52d02c7e14af7', '1.0000000000000001e+23'],
  ['444b1ae4d6e2ef4e', '999999999999999700000'],
  ['444b1ae4d6e2ef4f', '999999999999999900000'],
  ['444b1ae4d6e2ef50', '1e+21'],
  ['3eb0c6f7a0b5ed8c', '9.999999999999997e-7'],
  ['3eb0c6f7a0b5ed8d', '0.000001'],
  ['41b3de4355555553', '333333333.3333332'],
  ['41b3de4355555554', '333333333.33333325'],
  ['41b3de4355555555', '333333333.3333333'],
  ['41b3de4355555556', '333333333.3333334'],
  ['41b3de4355555557', '333333333.33333343'],
  ['becbf647612f3696', '-0.0000033333333333333333'],
  ['43143ff3c1cb0959', '1424953923781206.2'],
];

interface PublishedPair {
  source: string;
  input: string;
  output: string;
}

export const publishedPairs: PublishedPair[] = [
  {
    source: 'RFC 8785, sections 3.2.2 and 3.2.3: the sample object',
    input: String.raw`{
      "numbers": [333333333.33333329, 1E30, 4.50, 2e-3, 0.000000000000000000000000001],
      "string": "\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"\/",
      "literals": [null, true, false]
    }`,
    output: String.raw`{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"€$\u000f\nA'B\"\\\\\"/"}`,
  },
  {
    source: 'RFC 8785, section 3.2.3: the order of names',
    input: String.raw`{
      "\u20ac": "Euro Sign",
      "\r": "Carriage Return",
      "\ufb33": "Hebrew Letter Dalet With Dagesh",
      "1": "One",
      "\ud83d\ude00": "Emoji: Grinning Face",
      "\u0080": "Control",
      "\u00f6": "Latin Small Letter O With Diaeresis"
    }`,
    output: `{"\\r":"Carriage Return","1":"One","\u0080":"Control","ö":"Latin Small Letter O With Diaeresis","€":"Euro Sign","😀":"Emoji: Grinning Face","\ufb33":"Hebrew Letter Dalet With Dagesh"}`,
  },
  {
    source: "the authors' sample arrays.json",
    input: '[ 56, { "d": true, "10": null, "1": [ ] } ]',
    output: '[56,{"1":[],"10":null,"d":true}]',
  },
  {
    source: "the names of the authors' sample french.json, shuffled: no locale",
    input: '{ "péché": 2, "peach": 1, "sin": 4, "pêche": 3 }',
    output: '{"peach":1,"péché":2,"pêche":3,"sin":4}',
  },
  {
    source: "the authors' sample structures.json",
    input: String.raw`{ "1": {"f": {"f": "hi","F": 5} ,"\n": 56.0}, "10": { }, "": "empty", "a": { }, "111": [ { } ], "A": { } }`,
    output: String.raw`{"":"empty","1":{"\n":56,"f":{"F":5,"f":"hi"}},"10":{},"111":[{}],"A":{},"a":{}}`,
  },
  {
    source: "the authors' sample unicode.json: no normalisation",
    input: String.raw`{ "Unnormalized Unicode":"\u1e0d\u0307" }`,
    output: '{"Unnormalized Unicode":"\u1e0d\u0307"}',
  },
  {
    source: "the authors' sample values.json",
    input: String.raw`{
      "numbers": [1E30, 4.50, 333333333.33333329, 2e-3, 0.000000000000000000000000001],
      "escaping": "\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"\/",
      "literals": [null, true, false]
    }`,
    output: String.raw`{"escaping":"€$\u000f\nA'B\"\\\\\"/","literals":[null,true,false],"numbers":[1e+30,4.5,333333333.3333333,0.002,1e-27]}`,
  },
  {
    source: "the authors' sample weird.json",
    input: String.raw`{
      "\u20ac": "Euro Sign", "1": "One", "\u0080": "Control\u007f", "\ud83d\ude02": "Smiley",
      "\u00f6": "Latin Small Letter O With Diaeresis", "\ufb33": "Hebrew Letter Dalet With Dagesh",
      "</script>": "Browser Challenge"
    }`,
    output: `{"1":"One","</script>":"Browser Challenge","\u0080":"Control\u007f","ö":"Latin Small Letter O With Diaeresis","€":"Euro Sign","😂":"Smiley","\ufb33":"Hebrew Letter Dalet With Dagesh"}`,
  },
];
