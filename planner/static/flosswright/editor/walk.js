// Who ties what, row by row. Rows and positions count from 0 here, from 1 in words.

export const knotsInRow = (strands, row) => Math.floor((strands - (row % 2)) / 2);
export const leftOf = (row, place) => 2 * place + (row % 2);
export const leftTies = (knot) => knot === "f" || knot === "fb";
export const swaps = (knot) => knot === "f" || knot === "b";
export const MIRRORED = { f: "b", b: "f", fb: "bf", bf: "fb" };

// Tie one row on an order of strands; gives the knots, and changes the order.
function tieRow(words, row, order) {
  return words.map((knot, place) => {
    const left = leftOf(row, place);
    const [first, second] = [order[left], order[left + 1]];
    if (swaps(knot)) [order[left], order[left + 1]] = [second, first];
    const [tying, base] = leftTies(knot) ? [first, second] : [second, first];
    return { left, knot, tying, base };
  });
}

// Positions at the edges that have no partner in a row.
const idlePositions = (strands, row) =>
  [0, strands - 1].filter((position) => (position < row % 2) || (position - (row % 2)) === 2 * knotsInRow(strands, row));

// The knots of the rows and the strands that sit them out, and which strand stands at each
// position afterwards.
export function walk(strands, rows) {
  const order = Array.from({ length: strands }, (_, strand) => strand);
  const idle = [];
  const tied = rows.map((words, row) => {
    idle.push(idlePositions(strands, row).map((position) => ({ position, strand: order[position] })));
    return tieRow(words, row, order);
  });
  return { tied, idle, order };
}

// Which strand stands at each position after so many rows.
export const orderAfter = (strands, rows) => walk(strands, rows).order;
