/**
 * Reading Chevrotain's concrete syntax: children by the name of their rule, token or label, and places as spans. A node
 * comes from a parse without errors, so what the grammar demands is there; anything else is a bug of ours and is thrown.
 */
import { type CstNode, createTokenInstance, type IToken, type TokenType } from "chevrotain";
import { InternalError } from "./internal-error.ts";
import type { Source } from "./source.ts";
import type { Span } from "./span.ts";
import type { Name, Quoted } from "./tree.ts";

/** A node of the concrete syntax together with the source it came from. */
export type Syntax = { readonly source: Source; readonly node: CstNode };

/** The children of a rule or label, in the order of the text. */
export function parts(from: Syntax, name: string): Syntax[] {
  return (from.node.children[name] ?? []).map((child) => ({ source: from.source, node: child as CstNode }));
}

/** The one child of a rule or label, where the grammar leaves it open. */
export function optionalPart(from: Syntax, name: string): Syntax | undefined {
  const child = from.node.children[name]?.[0];
  return child && { source: from.source, node: child as CstNode };
}

/** The child of a rule or label that the grammar demands. */
export function part(from: Syntax, name: string): Syntax {
  return optionalPart(from, name) ?? absent(from, name);
}

/** The tokens of a type or label, in the order of the text. */
export function tokens(from: Syntax, name: string): readonly IToken[] {
  return (from.node.children[name] ?? []) as IToken[];
}

export function optionalToken(from: Syntax, name: string): IToken | undefined {
  return tokens(from, name)[0];
}

export function token(from: Syntax, name: string): IToken {
  return optionalToken(from, name) ?? absent(from, name);
}

export function has(from: Syntax, name: string): boolean {
  return from.node.children[name] !== undefined;
}

function absent(from: Syntax, name: string): never {
  throw new InternalError(`the syntax of ${from.node.name} lacks ${name}`);
}

export function tokenSpan(source: Source, at: IToken): Span {
  return { source, start: at.startOffset, end: at.startOffset + at.image.length };
}

/** The place of a node; Chevrotain counts the end inclusively. */
export function nodeSpan(from: Syntax): Span {
  const { startOffset, endOffset } = from.node.location ?? absent(from, "location");
  if (endOffset === undefined) return absent(from, "an end");
  return { source: from.source, start: startOffset, end: endOffset + 1 };
}

export function nameOf(source: Source, at: IToken): Name {
  return { text: at.image, span: tokenSpan(source, at) };
}

/** The one name of a node, under the label it has there. */
export function name(from: Syntax, label = "Name"): Name {
  return nameOf(from.source, token(from, label));
}

export function quoted(from: Syntax): Quoted {
  const at = token(from, "Text");
  return { value: at.image.slice(1, -1).replace(/\\(.)/g, "$1"), span: tokenSpan(from.source, at) };
}

/** A token that the lexer did not make. */
export function tokenAt(type: TokenType, start: number, image: string): IToken {
  return createTokenInstance(type, image, start, start + image.length - 1, NaN, NaN, NaN, NaN);
}
