import { parseSync } from 'vite';

/** One change of one place. */
export interface Mutation {
  readonly file: string;
  /** From 1. */
  readonly line: number;
  readonly start: number;
  readonly end: number;
  readonly was: string;
  readonly becomes: string;
  /** The innermost function around it (see functionsOf), −1 at the module's own level. */
  readonly within: number;
}

/** Where a function's own code begins and ends; an arrow without braces is one expression. */
export interface FunctionBody {
  readonly start: number;
  readonly end: number;
  readonly isExpression: boolean;
}

interface Node {
  readonly type: string;
  readonly start: number;
  readonly end: number;
  readonly [key: string]: unknown;
}

const SWAPS: Readonly<Record<string, string>> = {
  '+': '-',
  '-': '+',
  '*': '/',
  '/': '*',
  '**': '*',
  '%': '*',
  '<': '<=',
  '<=': '<',
  '>': '>=',
  '>=': '>',
  '===': '!==',
  '!==': '===',
  '&&': '||',
  '||': '&&',
  '+=': '-=',
  '-=': '+=',
  '*=': '/=',
  '/=': '*=',
  '++': '--',
  '--': '++',
};

/** All mutations of a TypeScript source: operators, comparisons, signs, constants, conditions, dropped statements, min and max. */
export function mutationsOf(file: string, text: string): Mutation[] {
  const found: Mutation[] = [];
  const program = parse(file, text);
  const bodies = functionsOf(file, text);
  const offer = (start: number, end: number, becomes: string): void => {
    const within = bodies.reduce(
      (best, body, i) =>
        body.start <= start && end <= body.end && (best < 0 || body.start >= bodies[best].start) ? i : best,
      -1,
    );
    const line = text.slice(0, start).split('\n').length;
    found.push({ file, line, start, end, was: text.slice(start, end), becomes, within });
  };
  walk(program, (node) => {
    offerFor(node, text, offer);
  });
  return found;
}

function offerFor(
  node: Node,
  text: string,
  offer: (start: number, end: number, becomes: string) => void,
): void {
  const between = (left: Node, right: Node): void => {
    const at = text.indexOf(String(node.operator), left.end);
    const becomes = SWAPS[String(node.operator)];
    if (becomes !== undefined && at >= 0 && at < right.start)
      offer(at, at + String(node.operator).length, becomes);
  };
  switch (node.type) {
    case 'BinaryExpression':
    case 'LogicalExpression':
      if (!isText(node.left) && !isText(node.right)) between(node.left as Node, node.right as Node);
      break;
    case 'AssignmentExpression':
      if (!isText(node.right)) between(node.left as Node, node.right as Node);
      break;
    case 'UpdateExpression': {
      const at = node.prefix === true ? node.start : node.end - 2;
      offer(at, at + 2, SWAPS[String(node.operator)]);
      break;
    }
    case 'UnaryExpression':
      if (node.operator === '-' || node.operator === '!') offer(node.start, node.start + 1, ' ');
      break;
    case 'Literal':
      if (typeof node.value === 'number') offer(node.start, node.end, otherNumber(node.value));
      if (typeof node.value === 'boolean') offer(node.start, node.end, String(!node.value));
      break;
    case 'MemberExpression': {
      const member = text.slice(node.start, node.end);
      if (member === 'Math.min') offer(node.start, node.end, 'Math.max');
      if (member === 'Math.max') offer(node.start, node.end, 'Math.min');
      break;
    }
    case 'IfStatement':
    case 'ConditionalExpression': {
      const { start, end } = node.test as Node;
      offer(start, end, `!(${text.slice(start, end)})`);
      break;
    }
    case 'ExpressionStatement':
    case 'ContinueStatement':
      offer(node.start, node.end, ';');
      break;
  }
}

/** A whole number goes up by one, another by a quarter. */
function otherNumber(value: number): string {
  return String(Number.isInteger(value) && Math.abs(value) < 1e3 ? value + 1 : value * 1.25);
}

function isText(node: unknown): boolean {
  const { type, value } = node as Node;
  return type === 'TemplateLiteral' || typeof value === 'string';
}

/** All functions with their bodies, in the order in which they begin. */
export function functionsOf(file: string, text: string): FunctionBody[] {
  const bodies: FunctionBody[] = [];
  walk(parse(file, text), ({ type, body }) => {
    if (!/^(?:Arrow)?Function(?:Declaration|Expression)$/.test(type)) return;
    const { start, end, type: bodyType } = body as Node;
    const isExpression = bodyType !== 'BlockStatement';
    bodies.push({ start: isExpression ? start : start + 1, end, isExpression });
  });
  return bodies.sort((a, b) => a.start - b.start);
}

/** The source with a mark set on entry to every function. */
export function withMarks(text: string, bodies: readonly FunctionBody[], firstMark: number): string {
  const edits = bodies.flatMap(({ start, end, isExpression }, i) => {
    const mark = `globalThis.functionsRun[${firstMark + i}] = 1`;
    return isExpression
      ? [
          { at: start, put: `(${mark}, ` },
          { at: end, put: ')' },
        ]
      : [{ at: start, put: `${mark};` }];
  });
  edits.sort((a, b) => b.at - a.at);
  let marked = text;
  for (const { at, put } of edits) marked = marked.slice(0, at) + put + marked.slice(at);
  return marked;
}

function parse(file: string, text: string): Node {
  const { program, errors } = parseSync(file, text);
  if (errors.length > 0) throw new Error(`${file}: ${errors[0].message}`);
  return program as unknown as Node;
}

const PASSED_OVER =
  /^(?:ImportDeclaration|ThrowStatement|TS(?!AsExpression|NonNullExpression|SatisfiesExpression).*)$/;
const TYPE_KEYS: ReadonlySet<string> = new Set([
  'typeAnnotation',
  'returnType',
  'typeParameters',
  'typeArguments',
]);

/** Every node but those of types, imports and what is thrown (messages). */
function walk(root: Node, visit: (node: Node) => void): void {
  const left: unknown[] = [root];
  while (left.length > 0) {
    const one = left.pop();
    if (Array.isArray(one)) {
      left.push(...one);
      continue;
    }
    if (typeof one !== 'object' || one === null || !('type' in one)) continue;
    const node = one as Node;
    if (PASSED_OVER.test(node.type)) continue;
    visit(node);
    for (const [key, child] of Object.entries(node)) if (!TYPE_KEYS.has(key)) left.push(child);
  }
}
