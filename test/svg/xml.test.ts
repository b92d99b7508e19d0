import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.ts';
import { readSvg } from '../../src/svg/read.ts';
import { drawing, one, XMLNS } from './svg-text.ts';

const refusal = (text: string): string => {
  try {
    readSvg(text, 'chip.svg');
  } catch (error) {
    if (error instanceof InputError) return error.message;
    throw error;
  }
  return 'read';
};

describe('values stay the text that was written', () => {
  it.each(['007', '1e3', '0x10', ' 12 ', 'Infinity'])('an id of %j is a name and no number', (id) => {
    expect(one(`<path id="${id}" data-depth="${id}" stroke="red" d="M0 0h1"/>`)).toMatchObject({
      name: id.trim(),
      id: id.trim(),
      dataDepth: id,
    });
  });

  it('labels that look like numbers stay text', () => {
    expect(one('<path xmlns:k="urn:k" k:label="007" stroke="red" d="M0 0h1"/>').name).toBe('007');
  });

  it('a backslash and the other kind of quote in a value are kept', () => {
    expect(one(`<path id='a"b\\' stroke="red" d="M0 0h1"/>`).name).toBe('a"b\\');
  });

  it('a line break in a value is a space, a reference to one is a line break', () => {
    expect(one('<path id="a\r\nb&#10;c" stroke="red" d="M0 0\nh1"/>').name).toBe('a b\nc');
  });

  it('references are decoded in values and in titles', () => {
    expect(one('<path id="&#181;&amp;&lt;&#x394;&quot;" stroke="red" d="M0 0h1"/>').name).toBe('µ&<Δ"');
    expect(one('<path stroke="red" d="M0 0h1"><title> a &amp; b </title></path>').name).toBe('a & b');
  });

  it('CDATA in a style sheet and in a title is its text', () => {
    const sheet = '<style><![CDATA[ g > path { stroke: red } ]]></style><g><path d="M0 0h1"/></g>';
    expect(one(sheet).style.stroked).toBe(true);
    expect(one('<path stroke="red" d="M0 0h1"><title>a<![CDATA[<&]]>b</title></path>').name).toBe('a<&b');
  });

  it('names with a dot or a letter beyond ASCII are read', () => {
    const text = '<ä.b/><g ö.label="x" id="Kanäle"><path stroke="red" d="M0 0h1"/></g>';
    expect(one(text).groups).toEqual([{ name: 'Kanäle', dataDepth: null }]);
  });

  it('comments, processing instructions and a plain DOCTYPE are passed over', () => {
    const text = `\ufeff<?xml version="1.0"?><!-- <a> -->
<!DOCTYPE svg PUBLIC "-//W3C//DTD SVG 1.1//EN" "http://www.w3.org/Graphics/SVG/1.1/DTD/svg11.dtd">
<svg ${XMLNS}><!-- <path d="x"/> --><path stroke="red" d="M0 0h1"/></svg><!-- end -->\n`;
    expect(readSvg(text, 'chip.svg').shapes).toHaveLength(1);
  });

  it('a hundred thousand nested groups are read without running out of stack', () => {
    const text = drawing(`${'<g>'.repeat(1e5)}<path stroke="red" d="M0 0h1"/>${'</g>'.repeat(1e5)}`);
    expect(readSvg(text, 'chip.svg').shapes).toHaveLength(1);
  });

  it('a prefix bound to the namespace of SVG is followed, and foreign elements are not drawn', () => {
    const text = `<s:svg xmlns:s="http://www.w3.org/2000/svg"><s:path stroke="red" d="M0 0h1"/>
      <path stroke="red" d="M0 0h1"/></s:svg>`;
    expect(readSvg(text, 'chip.svg').shapes).toHaveLength(1);
  });
});

describe('entities of the file itself', () => {
  const declared = (subset: string, use: string): string =>
    `<!DOCTYPE svg [ ${subset} ]><svg ${XMLNS}><path id="${use}" stroke="red" d="M0 0h1"/></svg>`;

  it('a plain one, as old editors write for namespaces, stands for its text', () => {
    const text = declared('<!ENTITY ns "x]>y"> <!-- \' --> <!ELEMENT a ANY>', '&ns;');
    expect(readSvg(text, 'chip.svg').shapes[0].name).toBe('x]>y');
  });

  it.each([
    ['<!ENTITY a "x"><!ENTITY b "&a;&a;">', 'refers to another entity'],
    ['<!ENTITY b SYSTEM "file:///etc/passwd">', 'stands for another file'],
    ['<!ENTITY b "<path/>">', 'holds markup'],
    ['', 'unknown entity "&b;"'],
  ])('%s is refused when it is used', (subset, why) => {
    expect(refusal(declared(subset, '&b;'))).toContain(why);
  });

  it('an entity cannot be expanded beyond the limit', () => {
    const text = declared(`<!ENTITY b "${'x'.repeat(1000)}">`, '&b;'.repeat(1001));
    expect(refusal(text)).toBe(
      "chip.svg:1: the file's own entities expand to over 1000000 characters (the limit); save the drawing as plain SVG",
    );
  });
});

describe('what is no drawing is refused in one line that says where, what and how to put it right', () => {
  it.each([
    ['', 'chip.svg: the file is empty; save the drawing again as plain SVG'],
    [' \n ', 'chip.svg: the file is empty; save the drawing again as plain SVG'],
    ['\n hello', 'chip.svg:2: not XML: it begins with "hello"; save the drawing as plain SVG'],
    [
      '\u001f\u008b\b',
      'chip.svg: the file is compressed (.svgz); save the drawing as plain, uncompressed SVG',
    ],
    [
      '<svg>\n\u0000',
      'chip.svg:2: not XML: it holds the control character 0x00; save the drawing as plain SVG in UTF-8',
    ],
    ['<!-- only -->', 'chip.svg:1: cut off: the file ends inside the drawing; save or copy it again'],
    [
      '<html>\n</html>',
      'chip.svg:1: XML, but not SVG: its root element is <html>, where <svg> is needed; save the drawing as plain SVG',
    ],
    ['<svg xmlns="urn:x"/>', 'in another namespace than http://www.w3.org/2000/svg'],
    ['<svg/>\n<svg/>', 'chip.svg:2: a second root element <svg> follows the drawing; keep only one <svg>'],
    ['<svg/>\n\n text', 'chip.svg:3: not XML: "text" follows the end of <svg>; remove it'],
    ['</svg>', 'chip.svg:1: not XML: </svg> closes nothing; remove it'],
    [
      '<svg>\n<g>\n</svg>',
      'chip.svg:3: not XML: </svg> stands where <g> of line 2 must be closed; write </g>',
    ],
    [
      '<svg>\n<g>',
      'chip.svg:2: cut off: the file ends inside the drawing (<g> of line 2 is never closed); save or copy it again',
    ],
    [
      '<svg>\n<path d="M0 0',
      'chip.svg:2: cut off: the file ends inside the value of d in <path> (<svg> of line 1 is never closed); save or copy it again',
    ],
    ['<svg><path d="M0 0>\n<path d="M1 1"/></svg>', 'holds "<"; is a closing quote missing?'],
    ['<svg><path d=M0/></svg>', 'attributes are written name="value"'],
    ['<svg><path id="a" id="b"/></svg>', '<path> has the attribute id twice; keep one'],
    ['<svg><title>a & b</title></svg>', 'not XML: a bare "&"; write "&amp;" for it'],
    ['<svg id="&#0;"/>', '"&#0;" is no character'],
    ['<svg>1 < 2</svg>', '"<" must open a tag; write "&lt;" for the character'],
  ])('%j', (text, message) => {
    expect(refusal(text)).toContain(message);
  });

  it('a file over 32 MB is refused by the name of the limit', () => {
    expect(refusal(drawing(`<!--${' '.repeat(32_000_000)}-->`))).toContain(
      'the SVG is over 32 MB (the limit)',
    );
  });

  it('a drawing cut off at any character is read or refused, and nothing else', () => {
    const text = `<?xml version="1.0"?><!DOCTYPE svg [<!ENTITY a "b">]>
<svg ${XMLNS} width="76mm" viewBox="0 0 76 26"><style><![CDATA[.a{stroke:red !important}]]></style>
<!-- c --><g id='&a;' transform="rotate(30 1 2)"><path class="a" style="fill:none" d="M0 0a1 1 0 01.5.5z"/></g>
<use href="#b"/><defs><circle id="b" r="1"/></defs></svg>\n`;
    let drawn = 0;
    for (let end = 0; end <= text.length; end++) if (refusal(text.slice(0, end)) === 'read') drawn++;
    // Whole, and without the line break at its end.
    expect(drawn).toBe(2);
  });
});
