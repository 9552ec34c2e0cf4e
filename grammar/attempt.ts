/**
 * Parsing the tokens of one declaration, and the first place where they go wrong: the index of the first token that no
 * declaration could have there after what stands before it, and what could stand there instead. The parser is made once,
 * when it is first needed: that costs more than most parses.
 */
import { type CstNode, type IToken, NotAllInputParsedException, type TokenType } from "chevrotain";
import { Parser } from "./parser.ts";
import { isA, reserved, Whole } from "./tokens.ts";

/** A token that could stand at a place, and the rule of the grammar that asks for it. */
export type Expected = { readonly type: TokenType; readonly rule: string };

export type Failure = {
  /** The token that cannot stand there; the number of tokens where the declaration ends too early. */
  readonly index: number;
  readonly expected: readonly Expected[];
  /** Whether the tokens before it are a declaration by themselves. */
  readonly complete: boolean;
};

export type Attempt =
  | { readonly node: CstNode; readonly failure?: undefined }
  | { readonly node?: undefined; readonly failure: Failure };

let parser: Parser | undefined;

/** Parses one declaration. */
export function attempt(tokens: readonly IToken[]): Attempt {
  const { node, error } = run(tokens);
  if (!error) return { node };
  const found = tokens.indexOf(error.token);
  return { failure: locate(tokens, found === -1 ? tokens.length : found, error.complete) };
}

/** How far a parse comes; the number of tokens and one when it comes to the end. */
export function reach(tokens: readonly IToken[]): number {
  const { failure } = attempt(tokens);
  return failure ? failure.index : tokens.length + 1;
}

function run(tokens: readonly IToken[]) {
  parser ??= new Parser();
  parser.input = tokens as IToken[];
  const node = parser.declaration();
  const [error] = parser.errors;
  if (!error) return { node };
  return { node, error: { token: error.token, complete: error instanceof NotAllInputParsedException } };
}

/** Lookahead may blame a token for the one after it: goes on while the token is one that could stand there. */
function locate(tokens: readonly IToken[], blamed: number, complete: boolean): Failure {
  for (let index = blamed; ; index++) {
    const expected = expectedAfter(tokens.slice(0, index));
    const token = tokens[index];
    if (token && index < blamed + 2 && expected.some(({ type }) => isA(token.tokenType, type))) continue;
    if (index === blamed) return { index, expected, complete };
    return { index, expected, complete: run(tokens.slice(0, index)).error === undefined };
  }
}

/** What could stand after the first tokens of a declaration. */
export function expectedAfter(tokens: IToken[]): Expected[] {
  const paths = parser?.computeContentAssist("declaration", tokens) ?? [];
  const expected = paths.map(({ nextTokenType, ruleStack }) => ({
    type: nextTokenType,
    rule: ruleStack.at(-1) ?? "",
  }));
  const maybeCount =
    tokens.at(-1)?.tokenType !== Whole && expected.some(({ type }) => type === reserved.separate);
  return maybeCount ? expected.filter(({ rule }) => !countGoesOn.has(rule)) : expected;
}

/** A name at the end may be the name of a count; nobody thinks of that who did not mean it. */
const countGoesOn = new Set(["counted", "member", "union"]);
