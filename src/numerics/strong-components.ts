/**
 * Strongly connected components of a directed graph in compressed rows.
 *
 * Returns the component of each node (numbers in order of completion: an arrow between components goes from the larger
 * number to the smaller) and their count. Rows with `ended[i] = 1` count as having no arrows.
 *
 * *Method*: Tarjan, SIAM J. Comput. 1 (1972) 146–160, with an explicit stack. *Cost*: nodes + arrows.
 */
export function strongComponents(
  size: number, rowStart: Int32Array, toState: Int32Array, ended?: Uint8Array,
): { component: Int32Array; count: number } {
  const component = new Int32Array(size).fill(-1);
  const number = new Int32Array(size).fill(-1);
  const low = new Int32Array(size);
  const cursor = new Int32Array(size);
  const open = new Int32Array(size);
  const path = new Int32Array(size);
  let opened = 0;
  let numbered = 0;
  let count = 0;

  for (let root = 0; root < size; root++) {
    if (number[root] >= 0) continue;
    let depth = 0;
    path[0] = root;
    begin(root);
    while (depth >= 0) {
      const i = path[depth];
      const end = ended?.[i] ? rowStart[i] : rowStart[i + 1];
      if (cursor[i] < end) {
        const j = toState[cursor[i]++];
        if (number[j] < 0) {
          begin(j);
          path[++depth] = j;
        } else if (component[j] < 0 && number[j] < low[i]) low[i] = number[j];
        continue;
      }
      if (low[i] === number[i]) {
        let j: number;
        do {
          j = open[--opened];
          component[j] = count;
        } while (j !== i);
        count++;
      }
      depth--;
      if (depth >= 0 && low[i] < low[path[depth]]) low[path[depth]] = low[i];
    }
  }
  return { component, count };

  function begin(i: number): void {
    number[i] = numbered;
    low[i] = numbered++;
    cursor[i] = rowStart[i];
    open[opened++] = i;
  }
}
