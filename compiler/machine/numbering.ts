/** Numbers things in the order they are first met, from the size of the map on. */
export function numberOf<K>(numbers: Map<K, number>, key: K): number {
  const known = numbers.get(key);
  if (known !== undefined) return known;
  const fresh = numbers.size;
  numbers.set(key, fresh);
  return fresh;
}
