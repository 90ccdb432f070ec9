// Steps of a grid pattern: each takes a state and gives back the next one, or the same one where
// nothing changes. No step alters a state. Rows and columns count from 0 here, from 1 in words.

import { StepRefused } from "./step_refused.js";

export { StepRefused };

const withRows = (state, rows) => ({ ...state, rows });
const columnsOf = (state) => state.rows[0].length;
const blankRow = (state, columns) => Array(columns).fill(state.background);
const counted = (count, word) => `${count} ${word}${count === 1 ? "" : "s"}`;

export function paint(state, cells, slot) {
  const columnsByRow = new Map();
  for (const [row, column] of cells) {
    const here = state.rows[row]?.[column];
    if (here === undefined || here === slot) continue;
    if (!columnsByRow.has(row)) columnsByRow.set(row, new Set());
    columnsByRow.get(row).add(column);
  }
  if (columnsByRow.size === 0) return state;
  return withRows(state, state.rows.map((cellRow, row) => {
    const columns = columnsByRow.get(row);
    return columns ? cellRow.map((here, column) => (columns.has(column) ? slot : here)) : cellRow;
  }));
}

// The cells of one colour that touch each other side by side, from one of them.
export function areaAt(state, row, column) {
  const slot = state.rows[row][column];
  const seen = new Set([`${row} ${column}`]);
  const cells = [[row, column]];
  for (const [y, x] of cells) {
    for (const [nextY, nextX] of [[y - 1, x], [y + 1, x], [y, x - 1], [y, x + 1]]) {
      const name = `${nextY} ${nextX}`;
      if (state.rows[nextY]?.[nextX] !== slot || seen.has(name)) continue;
      seen.add(name);
      cells.push([nextY, nextX]);
    }
  }
  return cells;
}

export function fillArea(state, row, column, slot) {
  return paint(state, areaAt(state, row, column), slot);
}

export function rectangleCells([row, column], [otherRow, otherColumn]) {
  const cells = [];
  for (let y = Math.min(row, otherRow); y <= Math.max(row, otherRow); y += 1) {
    for (let x = Math.min(column, otherColumn); x <= Math.max(column, otherColumn); x += 1) {
      cells.push([y, x]);
    }
  }
  return cells;
}

export function fillRectangle(state, corner, opposite, slot) {
  return paint(state, rectangleCells(corner, opposite), slot);
}

// The leading strand and the base strands take another slot; the cells stay as they are.
export function setBackground(state, slot) {
  return slot === state.background ? state : { ...state, background: slot };
}

// One slot for another, wherever it is: in the cells and as the background.
export function replaceColour(state, from, to) {
  const inCells = state.rows.some((cellRow) => cellRow.includes(from));
  if (from === to || (!inCells && state.background !== from)) return state;
  return {
    ...state,
    background: state.background === from ? to : state.background,
    rows: state.rows.map((cellRow) => cellRow.map((here) => (here === from ? to : here))),
  };
}

export function clear(state) {
  return fillRectangle(state, [0, 0], [state.rows.length - 1, columnsOf(state) - 1],
    state.background);
}

export function addRows(state, at, count, limits) {
  if (state.rows.length + count > limits.maxRows) {
    throw new StepRefused(`A grid pattern has at most ${counted(limits.maxRows, "row")}.`);
  }
  const added = Array.from({ length: count }, () => blankRow(state, columnsOf(state)));
  return count === 0 ? state : withRows(state, state.rows.toSpliced(at, 0, ...added));
}

export function removeRows(state, at, count, limits) {
  if (state.rows.length - count < limits.minRows) {
    throw new StepRefused(`A grid pattern has at least ${counted(limits.minRows, "row")}.`);
  }
  return count === 0 ? state : withRows(state, state.rows.toSpliced(at, count));
}

export function addColumns(state, at, count, limits) {
  if (columnsOf(state) + count > limits.maxColumns) {
    throw new StepRefused(`A grid pattern has at most ${counted(limits.maxColumns, "column")}.`);
  }
  if (count === 0) return state;
  return withRows(state, state.rows.map(
    (cellRow) => cellRow.toSpliced(at, 0, ...blankRow(state, count))));
}

export function removeColumns(state, at, count, limits) {
  if (columnsOf(state) - count < limits.minColumns) {
    throw new StepRefused(`A grid pattern has at least ${counted(limits.minColumns, "column")}.`);
  }
  if (count === 0) return state;
  return withRows(state, state.rows.map((cellRow) => cellRow.toSpliced(at, count)));
}

const sameRows = (some, others) =>
  some.every((cellRow, row) => cellRow.every((here, column) => here === others[row][column]));

const orSame = (state, rows) => (sameRows(state.rows, rows) ? state : withRows(state, rows));

export function mirrorLeftRight(state) {
  return orSame(state, state.rows.map((cellRow) => cellRow.toReversed()));
}

export function mirrorTopBottom(state) {
  return orSame(state, state.rows.toReversed());
}

// What goes out at one side comes in at the other.
export function shift(state, right, down) {
  const height = state.rows.length;
  const width = columnsOf(state);
  const wrapped = (place, size) => ((place % size) + size) % size;
  return orSame(state, state.rows.map((cellRow, row) => cellRow.map((_, column) =>
    state.rows[wrapped(row - down, height)][wrapped(column - right, width)])));
}

export function repeatRows(state, limits, { mirrored = false } = {}) {
  if (state.rows.length * 2 > limits.maxRows) {
    throw new StepRefused(`Twice ${counted(state.rows.length, "row")} is more than`
      + ` ${limits.maxRows}, which is the most.`);
  }
  const again = mirrored ? state.rows.toReversed() : state.rows;
  return withRows(state, [...state.rows, ...again]);
}

// The picture's rows are as they are tied: true where a letter is (see lettering.js).
export function insertPicture(state, picture, row, column, slot) {
  const inside = row >= 0 && column >= 0 && row + picture.length <= state.rows.length
    && column + picture[0].length <= columnsOf(state);
  if (!inside) {
    throw new StepRefused(`The words take ${counted(picture.length, "row")} and`
      + ` ${counted(picture[0].length, "column")}: there is no room for them here.`);
  }
  return paint(state, pictureCells(picture, row, column), slot);
}

export function pictureCells(picture, row, column) {
  return picture.flatMap((lit, y) =>
    lit.flatMap((isLit, x) => (isLit ? [[row + y, column + x]] : [])));
}

// Background rows after the last and columns on the right, until so many are there.
export function makeRoom(state, rows, columns, limits) {
  const wider = addColumns(state, columnsOf(state), Math.max(0, columns - columnsOf(state)),
    limits);
  return addRows(wider, wider.rows.length, Math.max(0, rows - wider.rows.length), limits);
}

// Cells come and go at the end and on the right.
export function resize(state, rows, columns, limits) {
  const isWithin = (size, least, most) => Number.isInteger(size) && size >= least && size <= most;
  if (!isWithin(rows, limits.minRows, limits.maxRows)
    || !isWithin(columns, limits.minColumns, limits.maxColumns)) {
    throw new StepRefused(`A grid pattern has ${limits.minRows} to ${limits.maxRows} rows and`
      + ` ${limits.minColumns} to ${limits.maxColumns} columns.`);
  }
  const roomy = makeRoom(state, rows, columns, limits);
  const shorter = removeRows(roomy, rows, roomy.rows.length - rows, limits);
  return removeColumns(shorter, columns, columnsOf(shorter) - columns, limits);
}
