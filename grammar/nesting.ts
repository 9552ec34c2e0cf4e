/**
 * How deep a declaration is nested, told from its tokens before it is parsed: parser and tree are walked by recursion, and
 * no text may overflow the stack. Two limits:
 *
 * - nesting, 64: brackets open at a place, and the operators before an operand that is still to come (`not`, a sign,
 *   `separate`, `overlapping`, and `^`, which groups from the right);
 * - length, 1,000: operators of one chain (`a or b or c …`) and of the chains within its brackets. Such a chain is not
 *   nested for a reader, but its tree leans to the left and is as deep as the chain is long.
 *
 * One pass, linear.
 */
import type { IToken, TokenType } from "chevrotain";
import { reserved, signs } from "./tokens.ts";

export const mostNesting = 64;
export const mostOperators = 1000;

export type TooDeep = { readonly token: IToken; readonly limit: "nesting" | "operators" };

/** One bracket that is open: operators before the operand to come, operators of the chain, longest chain in its brackets. */
type Level = { prefixes: number; chain: number; inner: number; longest: number };

const opening = new Set<TokenType>([signs.openParen, signs.openBrace, signs.openBracket]);
const closing = new Set<TokenType>([signs.closeParen, signs.closeBrace, signs.closeBracket]);
const prefix = new Set<TokenType>([reserved.not, reserved.separate, reserved.overlapping, signs.power]);
const joining = new Set<TokenType>([
  reserved.and,
  reserved.or,
  reserved.then,
  reserved.unless,
  reserved.except,
  signs.meet,
  signs.plus,
  signs.times,
  signs.over,
]);
const parting = new Set<TokenType>([
  signs.comma,
  signs.less,
  signs.atMost,
  signs.more,
  signs.atLeast,
  signs.equal,
  signs.arrow,
  signs.choice,
  signs.colon,
  signs.follows,
  reserved.restart,
  reserved.continue,
  reserved.quiet,
]);

/** The first token of a declaration that goes beyond a limit. */
export function findTooDeep(tokens: readonly IToken[]): TooDeep | undefined {
  const open: Level[] = [];
  let level = newLevel();
  let depth = 0;
  let operandBefore = false;
  for (const token of tokens) {
    const type = lookedAlike(token.tokenType);
    if (opening.has(type)) {
      open.push(level);
      depth += 1 + level.prefixes;
      level = newLevel();
    } else if (closing.has(type)) {
      const outer = open.pop();
      if (outer) {
        depth -= 1 + outer.prefixes;
        outer.inner = Math.max(outer.inner, level.longest, level.chain + level.inner);
        level = outer;
      }
    } else if (prefix.has(type) || (type === signs.minus && !operandBefore)) {
      level.prefixes++;
    } else if (joining.has(type) || type === signs.minus) {
      level.prefixes = 0;
      level.chain++;
    } else if (parting.has(type)) {
      level.longest = Math.max(level.longest, level.chain + level.inner);
      level.prefixes = level.chain = level.inner = 0;
    }
    operandBefore = !isOperator(type);
    if (depth + level.prefixes > mostNesting) return { token, limit: "nesting" };
    if (level.chain + level.inner > mostOperators) return { token, limit: "operators" };
  }
  return undefined;
}

function newLevel(): Level {
  return { prefixes: 0, chain: 0, inner: 0, longest: 0 };
}

/** What a sign of another language stands for. */
function lookedAlike(type: TokenType): TokenType {
  const isMeant = (one: TokenType) => joining.has(one) || prefix.has(one) || one === signs.minus;
  return type.CATEGORIES?.find(isMeant) ?? type;
}

/** Whether a minus after it is a sign, not a difference. */
function isOperator(type: TokenType): boolean {
  return (
    opening.has(type) || prefix.has(type) || joining.has(type) || parting.has(type) || type === signs.minus
  );
}
