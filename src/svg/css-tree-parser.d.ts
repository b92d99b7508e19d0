/** css-tree's parser alone: importing the package's root costs ten times as much and also loads its lexer. */
declare module 'css-tree/parser' {
  import type { CssNode, ParseOptions } from 'css-tree';

  const parse: (text: string, options?: ParseOptions) => CssNode;
  export default parse;
}
