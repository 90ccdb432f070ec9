// Steps of a diagonal pattern: each takes a state and gives back the next one; none alters a state.
// The rows stay whole: as many knots as the strands need, and an even number of rows.
// Rows, places and strands count from 0 here, from 1 in words.

import { MIRRORED, knotsInRow, orderAfter } from "./walk.js";
import { StepRefused } from "./step_refused.js";

export const LIMITS = { minStrands: 2, maxStrands: 60, minRows: 2, maxRows: 400 };

const changedAt = (list, index, value) => list.map((old, place) => (place === index ? value : old));
const refuseBelow = (value, least, words) => {
  if (value < least) throw new StepRefused(`A pattern has at least ${least} ${words}.`);
};
const refuseAbove = (value, most, words) => {
  if (value > most) throw new StepRefused(`A pattern has at most ${most} ${words}.`);
};

export function setKnot(state, row, place, knot) {
  return { ...state, rows: changedAt(state.rows, row, changedAt(state.rows[row], place, knot)) };
}

export function fillRow(state, row, knot) {
  return { ...state, rows: changedAt(state.rows, row, state.rows[row].map(() => knot)) };
}

export function setSlot(state, strand, slot) {
  return { ...state, slots: changedAt(state.slots, strand, slot) };
}

// A strand more at the right edge. Its knots return, so that all others stay as they are.
export function addRightStrand(state, slot) {
  refuseAbove(state.slots.length + 1, LIMITS.maxStrands, "strands");
  const strands = state.slots.length + 1;
  const rows = state.rows.map((words, row) =>
    words.length < knotsInRow(strands, row) ? [...words, "bf"] : words);
  return { ...state, slots: [...state.slots, slot], rows };
}

export function removeRightStrand(state) {
  refuseBelow(state.slots.length - 1, LIMITS.minStrands, "strands");
  const strands = state.slots.length - 1;
  const rows = state.rows.map((words, row) => words.slice(0, knotsInRow(strands, row)));
  return { ...state, slots: state.slots.slice(0, -1), rows };
}

// A strand more at the left edge moves every pair by one, which only the next row can hold: the
// last row comes first, and the strands begin as they stand before it.
export function addLeftStrand(state, slot) {
  refuseAbove(state.slots.length + 1, LIMITS.maxStrands, "strands");
  const turned = [state.rows.at(-1), ...state.rows.slice(0, -1)];
  const rows = turned.map((words, row) => (row % 2 === 0 ? ["fb", ...words] : words));
  const before = slotsBefore(state.slots, [state.rows.at(-1)], state.rows.length - 1);
  return { ...state, slots: [slot, ...before], rows };
}

export function removeLeftStrand(state) {
  refuseBelow(state.slots.length - 1, LIMITS.minStrands, "strands");
  const after = orderAfter(state.slots.length, state.rows.slice(0, 1)).map((strand) => state.slots[strand]);
  const without = state.rows.map((words, row) => (row % 2 === 0 ? words.slice(1) : words));
  return { ...state, slots: after.slice(1), rows: [...without.slice(1), without[0]] };
}

// Where, among the knots of a row, the strands at `left` and `left + 1` have their knot, or else the
// knot that begins one position on.
const placeAt = (left, row) => Math.floor((left + 1 - (row % 2)) / 2);

// Two strands more, beside the two that meet at `left`: they are tied as these two are, and what
// is to their right moves along.
export function widen(state, left) {
  refuseAbove(state.slots.length + 2, LIMITS.maxStrands, "strands");
  const slots = [...state.slots];
  slots.splice(left + 2, 0, ...slots.slice(left, left + 2));
  const rows = state.rows.map((words, row) => {
    const at = placeAt(left, row);
    const longer = [...words];
    longer.splice(at, 0, words[at] ?? words.at(-1) ?? "f");
    return longer;
  });
  return { ...state, slots, rows };
}

export function narrow(state, left) {
  refuseBelow(state.slots.length - 2, LIMITS.minStrands, "strands");
  const slots = [...state.slots];
  slots.splice(left, 2);
  const rows = state.rows.map((words, row) => {
    const shorter = [...words];
    shorter.splice(Math.min(placeAt(left, row), words.length - 1), 1);
    return shorter;
  });
  return { ...state, slots, rows };
}

// The slots that stand so after the rows, the first of which is row `first` of the repeat.
function slotsBefore(slots, rows, first) {
  const shifted = first % 2 === 0 ? rows : [[], ...rows];
  const before = Array(slots.length);
  orderAfter(slots.length, shifted).forEach((strand, position) => { before[strand] = slots[position]; });
  return before;
}

export const pairOf = (row) => row - (row % 2);

const plainRow = (strands, row, knot = "f") => Array(knotsInRow(strands, row)).fill(knot);

// Two rows of forward knots, behind the pair of rows that holds `row`.
export function addRows(state, row) {
  refuseAbove(state.rows.length + 2, LIMITS.maxRows, "rows");
  const strands = state.slots.length;
  const at = pairOf(row) + 2;
  const rows = [...state.rows];
  rows.splice(at, 0, plainRow(strands, 0), plainRow(strands, 1));
  return { ...state, rows };
}

export function copyRows(state, row) {
  refuseAbove(state.rows.length + 2, LIMITS.maxRows, "rows");
  const at = pairOf(row);
  const rows = [...state.rows];
  rows.splice(at + 2, 0, ...rows.slice(at, at + 2));
  return { ...state, rows };
}

export function removeRows(state, row) {
  refuseBelow(state.rows.length - 2, LIMITS.minRows, "rows");
  const rows = [...state.rows];
  rows.splice(pairOf(row), 2);
  return { ...state, rows };
}

// Left for right. With an odd number of strands the image begins at row 2: the mirror image of
// row 1 leaves the first strand out, which only an even row may do.
export function mirror(state) {
  const strands = state.slots.length;
  const skipped = strands % 2;
  const order = orderAfter(strands, state.rows.slice(0, skipped));
  return {
    ...state,
    slots: order.map((strand) => state.slots[strand]).reverse(),
    rows: mirroredRows(state),
  };
}

function mirroredRows(state) {
  const skipped = state.slots.length % 2;
  const rows = [...state.rows.slice(skipped), ...state.rows.slice(0, skipped)];
  return rows.map((words) => words.map((knot) => MIRRORED[knot]).reverse());
}

const BACKWARDS = { f: "b", b: "f", fb: "fb", bf: "bf" };

// From the other end. The last row stays the last, so that row 1 pairs the strands it has to.
export function turnRound(state) {
  const others = state.rows.slice(0, -1);
  const order = orderAfter(state.slots.length, others);
  return {
    ...state,
    slots: order.map((strand) => state.slots[strand]),
    rows: [...others.reverse(), state.rows.at(-1)].map((words) => words.map((knot) => BACKWARDS[knot])),
  };
}

// Begin two rows later; the strands begin as they stand there, so the band looks the same.
export function beginLater(state) {
  const first = state.rows.slice(0, 2);
  const order = orderAfter(state.slots.length, first);
  return {
    ...state,
    slots: order.map((strand) => state.slots[strand]),
    rows: [...state.rows.slice(2), ...first],
  };
}

export function beginEarlier(state) {
  const last = state.rows.slice(-2);
  return {
    ...state,
    slots: slotsBefore(state.slots, last, 0),
    rows: [...last, ...state.rows.slice(0, -2)],
  };
}

// The colours move one strand along; the one at the edge comes in at the other.
export function shiftColours(state, by) {
  const count = state.slots.length;
  const slots = state.slots.map((_, strand) => state.slots[(strand - by + count) % count]);
  return { ...state, slots };
}

export function repeatTwice(state) {
  refuseAbove(2 * state.rows.length, LIMITS.maxRows, "rows");
  return { ...state, rows: [...state.rows, ...state.rows] };
}

// The rows, then the rows mirrored: what slants one way comes back the other way.
export function repeatMirrored(state) {
  refuseAbove(2 * state.rows.length, LIMITS.maxRows, "rows");
  return { ...state, rows: [...state.rows, ...mirroredRows(state)] };
}

export function clear(state) {
  return { ...state, rows: state.rows.map((words) => words.map(() => "f")) };
}
