/**
 * In which order things that lead to one another can be worked out, and which lead back to themselves.
 * In: the number of nodes and where each leads. Out: an order with every node after those it leads to, and one cycle for
 * each set of nodes that lead to each other. Cost: linear; no recursion, so that long chains do no harm.
 * Source: Tarjan (1972), "Depth-first search and linear graph algorithms", SIAM J. Comput. 1:146.
 */

export type Order = {
  /** All nodes, each after those it leads to (those on a cycle in some order). */
  readonly order: readonly number[];
  /** Each a closed walk without its last step: the last node leads to the first. */
  readonly cycles: readonly (readonly number[])[];
};

/** Works out the order. */
export function dependencyOrder(count: number, leadsTo: (node: number) => readonly number[]): Order {
  const targets = Array.from({ length: count }, (_, node) => leadsTo(node));
  const components = stronglyConnected(targets);
  const cycles: number[][] = [];
  for (const component of components) {
    const start = Math.min(...component.slice(0, 1000));
    if (component.length > 1 || targets[start]?.includes(start)) {
      cycles.push(shortestCycle(start, targets, new Set(component)));
    }
  }
  return { order: components.flat(), cycles };
}

/** Strongly connected components, each after those it leads to. */
export function stronglyConnected(targets: readonly (readonly number[])[]): number[][] {
  const index = new Int32Array(targets.length).fill(-1);
  const low = new Int32Array(targets.length);
  const onStack = new Uint8Array(targets.length);
  const stack: number[] = [];
  const components: number[][] = [];
  let next = 0;
  const enter = (node: number, walk: { node: number; edge: number }[]): void => {
    index[node] = low[node] = next++;
    stack.push(node);
    onStack[node] = 1;
    walk.push({ node, edge: 0 });
  };
  for (let root = 0; root < targets.length; root++) {
    if (index[root] !== -1) continue;
    const walk: { node: number; edge: number }[] = [];
    enter(root, walk);
    for (let top = walk.at(-1); top !== undefined; top = walk.at(-1)) {
      const target = targets[top.node]?.[top.edge++];
      if (target !== undefined) {
        if (index[target] === -1) enter(target, walk);
        else if (onStack[target] === 1) low[top.node] = Math.min(low[top.node]!, index[target]!);
        continue;
      }
      walk.pop();
      const parent = walk.at(-1);
      if (parent !== undefined) low[parent.node] = Math.min(low[parent.node]!, low[top.node]!);
      if (low[top.node] === index[top.node]) {
        const component = stack.splice(stack.lastIndexOf(top.node));
        for (const node of component) onStack[node] = 0;
        components.push(component);
      }
    }
  }
  return components;
}

/** A shortest closed walk through `start` inside one component. */
function shortestCycle(
  start: number,
  targets: readonly (readonly number[])[],
  component: ReadonlySet<number>,
): number[] {
  const cameFrom = new Map<number, number>();
  const queue = [start];
  for (const node of queue) {
    for (const target of targets[node] ?? []) {
      if (target === start) return walkBack(node, start, cameFrom);
      if (!component.has(target) || cameFrom.has(target)) continue;
      cameFrom.set(target, node);
      queue.push(target);
    }
  }
  return [start];
}

function walkBack(last: number, start: number, cameFrom: ReadonlyMap<number, number>): number[] {
  const cycle = [last];
  for (let node = last; node !== start; ) {
    node = cameFrom.get(node) ?? start;
    cycle.push(node);
  }
  return cycle.reverse();
}
