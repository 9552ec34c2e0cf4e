/**
 * The names mentioned in a piece of the tree, in the order they stand. Nothing is resolved. Walks with a stack of its own,
 * so that depth does no harm.
 */
import type { ConditionTree, Count, Expression, Name, PatternTree, SetTree } from "../../grammar/tree.ts";

/** Names that stand for a number: lets and parameters. */
export function namesInExpression(expression: Expression): Name[] {
  const names: Name[] = [];
  const stack: Expression[] = [expression];
  for (let node = stack.pop(); node !== undefined; node = stack.pop()) {
    switch (node.kind) {
      case "number":
        break;
      case "reference":
        names.push(node.name);
        break;
      case "call":
        for (const operand of node.operands) stack.push(operand);
        break;
      case "negate":
        stack.push(node.operand);
        break;
      case "binary":
        stack.push(node.right, node.left);
        break;
    }
  }
  return names;
}

/** Names of letters and groups. */
export function namesInSet(set: SetTree): Name[] {
  const names: Name[] = [];
  const stack: SetTree[] = [set];
  for (let node = stack.pop(); node !== undefined; node = stack.pop()) {
    switch (node.kind) {
      case "any":
        break;
      case "named":
        names.push(node.name);
        break;
      case "union":
        for (let i = node.members.length - 1; i >= 0; i--) stack.push(node.members[i]!);
        break;
      case "meet":
      case "except":
        stack.push(node.right, node.left);
        break;
    }
  }
  return names;
}

/** Every part of a condition, itself first. */
function partsOf(condition: ConditionTree): ConditionTree[] {
  const parts: ConditionTree[] = [];
  const stack: ConditionTree[] = [condition];
  for (let node = stack.pop(); node !== undefined; node = stack.pop()) {
    parts.push(node);
    switch (node.kind) {
      case "set":
      case "run":
      case "weakRun":
      case "scan":
      case "pattern":
        break;
      case "separate":
      case "overlapping":
      case "not":
        stack.push(node.operand);
        break;
      case "then":
      case "unless":
      case "and":
      case "or":
        stack.push(node.right, node.left);
        break;
    }
  }
  return parts;
}

/** Names that stand alone in a condition: rules, letters or groups. */
export function loneNamesInCondition(condition: ConditionTree): Name[] {
  return partsOf(condition).flatMap((part) =>
    part.kind === "set" && part.set.kind === "named" ? [part.set.name] : [],
  );
}

/** All names in a condition: rules, letters, groups, and lets that stand as counts. */
export function namesInCondition(condition: ConditionTree): Name[] {
  return partsOf(condition).flatMap((part) => {
    switch (part.kind) {
      case "set":
        return namesInSet(part.set);
      case "run":
        return [...namesInCount(part.count), ...namesInSet(part.set)];
      case "weakRun": {
        const failures = part.failures === undefined ? [] : namesInSet(part.failures);
        return [...namesInCount(part.count), ...namesInSet(part.set), ...namesInCount(part.gap), ...failures];
      }
      case "scan":
        return [...namesInCount(part.count), ...namesInCount(part.window), ...namesInSet(part.set)];
      case "pattern":
        return namesInPattern(part.pattern);
      case "separate":
      case "overlapping":
        return namesInCount(part.count);
      case "then":
      case "unless":
        return part.within === undefined ? [] : namesInCount(part.within);
      default:
        return [];
    }
  });
}

function namesInPattern(pattern: PatternTree): Name[] {
  switch (pattern.kind) {
    case "choice":
      return pattern.options.flatMap(namesInPattern);
    case "sequence":
      return pattern.items.flatMap(namesInPattern);
    case "letters":
      return namesInSet(pattern.set);
    case "repeat":
      return namesInPattern(pattern.operand);
  }
}

/** The name of a let that stands as a count. */
export function namesInCount(count: Count): Name[] {
  return count.kind === "named" ? [count.name] : [];
}
