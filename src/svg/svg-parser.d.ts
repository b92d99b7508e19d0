/** The part of svg-parser 2.1 that is used here; the package ships no declarations. */
declare module 'svg-parser' {
  export interface ParsedElement {
    readonly type: 'element';
    readonly tagName: string;
    readonly properties: Readonly<Record<string, string | number | true | undefined>>;
    readonly children: readonly (ParsedElement | ParsedText | string)[];
  }
  export interface ParsedText {
    readonly type: 'text';
    readonly value: string;
  }
  export function parse(source: string): {
    readonly type: 'root';
    readonly children: readonly [ParsedElement];
  };
}
