import fc from 'fast-check';

/** One change of a text, its place as a share of the length so that it fits any text. */
type Change =
  | { readonly kind: 'flip'; readonly at: number; readonly byte: number }
  | { readonly kind: 'cut'; readonly at: number; readonly share: number }
  | { readonly kind: 'repeat'; readonly at: number; readonly share: number; readonly times: number }
  | { readonly kind: 'insert'; readonly at: number; readonly word: string }
  | { readonly kind: 'number'; readonly at: number; readonly word: string }
  | { readonly kind: 'end'; readonly at: number };

const NUMBERS = [
  ...[
    '0',
    '-0',
    '1',
    '-1',
    '0.5',
    '1e-3',
    '1e3',
    '1e9',
    '1e-9',
    '1e308',
    '-1e308',
    '1e-308',
    '1e999',
    '5e-324',
  ],
  ...[
    'NaN',
    'Infinity',
    '',
    '00',
    '1.',
    '.',
    '+1',
    '--1',
    '0x10',
    '1,5',
    '99999999999999999999',
    '1e',
    '½',
    '٣',
  ],
];

const WORDS = [
  ...[
    '<',
    '>',
    '&',
    '"',
    "'",
    '/>',
    '</g>',
    '<g>',
    '<!--',
    '-->',
    ']]>',
    '<![CDATA[',
    '<?x?>',
    '&amp;',
    '&#0;',
    '&x;',
  ],
  ...[
    '<use href="#a"/>',
    '<style>*{stroke:none}</style>',
    '<path d="M0 0h9" stroke="red"/>',
    '<circle r="1"/>',
  ],
  ...[
    'transform="scale(0)"',
    'transform="rotate(45)"',
    'style="all:unset"',
    'stroke-width="0"',
    'display="none"',
  ],
  ...[
    'data-depth="1 um"',
    'id="in"',
    'id="out"',
    ' 10% ',
    'px',
    'mm',
    'M',
    'z',
    'A',
    'C',
    'NaN',
    '\0',
    '\ufeff',
    '\r',
  ],
  ...[
    ': ',
    '- ',
    '{',
    '}',
    '[',
    ']',
    '#',
    '&a ',
    '*a',
    '!!float ',
    '|',
    '>-',
    '---\n',
    '...\n',
    '? ',
    '<<: ',
    '\t',
    '\n  ',
  ],
  ...[
    'um',
    'kPa',
    '%',
    'degC',
    'uL/min',
    'm^3/s',
    'ignore',
    'ports:',
    'in:',
    'out:',
    'lane-*',
    '*',
    'open',
    'sealed',
  ],
  ...[
    'cases:\n  a: {}\n',
    'targets:\n  - {}\n',
    'depth: 0 um\n',
    'unit: 1 mm\n',
    'outline: x\n',
    '__proto__: {}\n',
  ],
];

const share = fc.double({ min: 0, max: 1, noNaN: true });

const change: fc.Arbitrary<Change> = fc.oneof(
  fc.record({ kind: fc.constant('flip' as const), at: share, byte: fc.nat(255) }),
  fc.record({
    kind: fc.constant('cut' as const),
    at: share,
    share: fc.double({ min: 0, max: 0.1, noNaN: true }),
  }),
  fc.record({
    kind: fc.constant('repeat' as const),
    at: share,
    share: fc.double({ min: 0, max: 0.2, noNaN: true }),
    times: fc.integer({ min: 2, max: 20 }),
  }),
  fc.record({ kind: fc.constant('insert' as const), at: share, word: fc.constantFrom(...WORDS) }),
  {
    weight: 3,
    arbitrary: fc.record({
      kind: fc.constant('number' as const),
      at: share,
      word: fc.constantFrom(...NUMBERS),
    }),
  },
  fc.record({ kind: fc.constant('end' as const), at: share }),
);

export const changes: fc.Arbitrary<readonly Change[]> = fc.array(change, { minLength: 1, maxLength: 6 });

/** The bytes after all changes, in order. */
export function changed(bytes: Buffer, list: readonly Change[]): Buffer {
  return list.reduce(apply, bytes);
}

function apply(bytes: Buffer, one: Change): Buffer {
  const at = Math.floor(one.at * bytes.length);
  switch (one.kind) {
    case 'flip': {
      const copy = Buffer.from(bytes);
      if (at < copy.length) copy[at] = one.byte;
      return copy;
    }
    case 'cut':
      return Buffer.concat([bytes.subarray(0, at), bytes.subarray(at + Math.ceil(one.share * bytes.length))]);
    case 'repeat': {
      const part = bytes.subarray(at, at + Math.ceil(one.share * bytes.length));
      const times = Array.from({ length: one.times }, () => part);
      return Buffer.concat([bytes.subarray(0, at), ...times, bytes.subarray(at)]);
    }
    case 'insert':
      return Buffer.concat([bytes.subarray(0, at), Buffer.from(one.word), bytes.subarray(at)]);
    case 'number': {
      // Bytes as letters, so that places in the text are places in the bytes.
      const text = bytes.toString('latin1');
      const found = [...text.matchAll(/-?(?:\d+\.?\d*|\.\d+)(?:e[+-]?\d+)?/gi)];
      const match = found[Math.min(found.length - 1, Math.floor(one.at * found.length))];
      if (match === undefined) return bytes;
      const rest = bytes.subarray(match.index + match[0].length);
      return Buffer.concat([bytes.subarray(0, match.index), Buffer.from(one.word), rest]);
    }
    case 'end':
      return bytes.subarray(0, at);
    default:
      return one satisfies never;
  }
}
