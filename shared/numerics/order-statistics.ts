/**
 * Rearranges `values` so that index `k` holds the value that sorting would put there, nothing larger before it and
 * nothing smaller after it, and returns that value. Average time proportional to the length, also with many ties
 * (Hoare's selection with the median of three as pivot).
 */
export function selectIndex(values: Float64Array, k: number): number {
  let low = 0;
  let high = values.length - 1;
  while (low < high) {
    const pivot = medianOfThree(values[low]!, values[(low + high) >>> 1]!, values[high]!);
    let left = low;
    let right = high;
    while (left <= right) {
      while (values[left]! < pivot) left++;
      while (values[right]! > pivot) right--;
      if (left > right) break;
      const moved = values[left]!;
      values[left++] = values[right]!;
      values[right--] = moved;
    }
    if (k <= right) high = right;
    else if (k >= left) low = left;
    else break;
  }
  return values[k]!;
}

/**
 * Value at a real 1-based `rank` of the values in order, interpolated between its neighbours and kept inside the ends.
 * Rearranges `values`, which must not be empty.
 */
export function valueAtRank(values: Float64Array, rank: number): number {
  const position = Math.min(Math.max(rank, 1), values.length) - 1;
  const below = Math.floor(position);
  const low = selectIndex(values, below);
  if (position === below) return low;
  let next = Infinity;
  for (let i = below + 1; i < values.length; i++) if (values[i]! < next) next = values[i]!;
  return low + (position - below) * (next - low);
}

function medianOfThree(a: number, b: number, c: number): number {
  return Math.max(Math.min(a, b), Math.min(Math.max(a, b), c));
}
