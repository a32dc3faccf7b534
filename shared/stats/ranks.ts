/**
 * Ranks from 1, equal values sharing the mean of the ranks they would take (midranks).
 *
 * @returns ranks in the order of the values, and the size of every group of equal values larger than one
 * @source the usual convention for rank tests, e.g. Lehmann 1975
 * @example midranks([3, 1, 3]) // ranks [2.5, 1, 2.5], ties [2]
 */
export function midranks(values: ArrayLike<number>): { ranks: Float64Array; ties: number[] } {
  const order = Array.from({ length: values.length }, (_, i) => i).sort((i, j) => (values[i] as number) - (values[j] as number));
  const ranks = new Float64Array(values.length);
  const ties: number[] = [];
  for (let start = 0; start < order.length; ) {
    let end = start + 1;
    while (end < order.length && values[order[end] as number] === values[order[start] as number]) end++;
    for (let k = start; k < end; k++) ranks[order[k] as number] = (start + 1 + end) / 2;
    if (end - start > 1) ties.push(end - start);
    start = end;
  }
  return { ranks, ties };
}
