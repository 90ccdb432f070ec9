// The board of a grid pattern: the chart, what a hand or a key does to it, and its tools.

import { EDGE_PX, GridChart } from "./grid_chart.js";
import { LetteringPanel } from "./grid_lettering.js";
import { GridPalette } from "./grid_palette.js";
import * as steps from "./grid_steps.js";
import { Strokes } from "./grid_strokes.js";
import { StepRefused } from "./step_refused.js";

const SIZES_PX = [14, 18, 22, 28, 36, 44, 56, 70];
const FAR_ROWS = 10;

export class GridBoard {
  // element: templates/patterns/_editor_grid.html; colours: "#rrggbb" by slot; names: the shade
  // of each slot in words, where there is one.
  constructor(session, element, { colours, names = {} }) {
    Object.assign(this, { session, element, colours, names });
    this.limits = Object.fromEntries(["minColumns", "maxColumns", "minRows", "maxRows"]
      .map((name) => [name, Number(this.find("[data-limits]").dataset[name])]));
    this.cursor = [0, 0];
    this.corner = null; // of a rectangle, from its first key to its second
    this.stroke = null;
    this.chart = new GridChart(this.find("[data-chart]"));
    this.palette = new GridPalette(this.find("[data-palette]"), this);
    this.lettering = new LetteringPanel(this.find("[data-lettering]"), this);
    this.nameChart();
    this.listen();
    this.render();
    this.whenShown(() => this.fitSize());
  }

  find(selector) {
    return this.element.querySelector(selector);
  }

  get state() {
    return this.session.state;
  }

  get slot() {
    return this.palette.slot;
  }

  get tool() {
    return this.find("[name=grid-tool]:checked").value;
  }

  nameChart() {
    this.chart.svg.setAttribute("aria-label", "Chart of the pattern, cell by cell");
    this.chart.svg.setAttribute("aria-describedby", this.find("[data-keys]").id);
  }

  // A chart that is not on the page yet has no width to fit into.
  whenShown(action) {
    const { box } = this.chart;
    const watcher = new ResizeObserver(() => {
      if (box.clientWidth === 0) return;
      watcher.disconnect();
      action();
    });
    watcher.observe(box);
  }

  // As wide as the box allows, in whole pixels; a finger needs larger cells than a mouse.
  fitSize() {
    const least = window.matchMedia("(pointer: coarse)").matches ? 24 : 18;
    const { box } = this.chart;
    const fitting = Math.floor((box.clientWidth - EDGE_PX) / this.state.rows[0].length);
    this.chart.columnPx = Math.min(Math.max(fitting, least), 44);
    this.render();
  }

  listen() {
    const { svg } = this.chart;
    new Strokes(this.chart, {
      isHand: () => this.tool === "hand" && !this.lettering.isOpen,
      begin: (cell) => this.begin(cell),
      move: (cells) => this.extend(cells),
      end: () => this.finish(),
      cancel: () => this.cancel(),
    });
    svg.addEventListener("keydown", (event) => this.pressed(event));
    svg.addEventListener("focus", () => this.sayCell());
    this.element.addEventListener("change", () => this.showTool());
    this.element.addEventListener("click", (event) => {
      const button = event.target.closest("[data-view]");
      if (button) this.changeView(button);
    });
    this.showTool();
  }

  showTool() {
    this.chart.surface.dataset.tool = this.lettering.isOpen ? "words" : this.tool;
    this.corner = null;
  }

  changeView(button) {
    const { chart } = this;
    const { view } = button.dataset;
    const here = chart.columnPx;
    if (view === "larger") chart.columnPx = SIZES_PX.find((size) => size > here) ?? here;
    if (view === "smaller") chart.columnPx = SIZES_PX.findLast((size) => size < here) ?? here;
    if (view === "lie") {
      chart.isLying = !chart.isLying;
      button.setAttribute("aria-pressed", String(chart.isLying));
    }
    this.render();
    chart.reveal(this.cursor);
  }

  render() {
    const { rows } = this.state;
    this.cursor = [Math.min(this.cursor[0], rows.length - 1),
      Math.min(this.cursor[1], rows[0].length - 1)];
    this.chart.show(this.state, this.palette.allColours);
    this.chart.showCursor(this.cursor);
    this.palette.render();
    this.lettering.render();
    this.find("[data-size=rows]").value = rows.length;
    this.find("[data-size=columns]").value = rows[0].length;
  }

  // One step of the session; what the limits forbid is said, and nothing changes.
  do(step, label) {
    try {
      const next = step(this.state);
      if (next !== this.state) this.session.do(next, label);
      this.say(label);
      return true;
    } catch (error) {
      if (!(error instanceof StepRefused)) throw error;
      this.say(error.message);
      return false;
    }
  }

  say(words) {
    this.find("[data-said]").textContent = words;
  }

  sayCell() {
    const [row, column] = this.cursor;
    const slot = this.state.rows[row][column];
    const isOther = this.saidRow !== row;
    this.saidRow = row;
    const side = isOther ? this.sideOf(row) : "";
    this.say(`Row ${row + 1}${side}, column ${column + 1}: ${this.wordsFor(slot)}`);
  }

  // Only where every repeat begins at the same side can a row of the chart tell its own.
  sideOf(row) {
    const isFixed = this.state.finish !== "centred" && this.state.rows.length % 2 === 0;
    return isFixed ? `, tied from the ${row % 2 ? "right" : "left"}` : "";
  }

  wordsFor(slot) {
    const words = this.names[slot] ? `${slot}, ${this.names[slot]}` : slot;
    return slot === this.state.background ? `${words} (background)` : words;
  }

  moveTo(cell) {
    if (!this.chart.has(cell)) return;
    this.cursor = cell;
    this.chart.showCursor(cell);
    this.chart.reveal(cell);
    this.sayCell();
  }

  // Shows the cell that a message is about.
  point(row, column) {
    this.moveTo([row, column]);
    this.chart.svg.focus();
  }

  begin(cell) {
    this.chart.svg.focus({ preventScroll: true });
    this.stroke = { from: cell, cells: [cell] };
    this.cursor = cell;
    this.chart.showCursor(cell);
    if (this.lettering.isOpen) this.lettering.grip(cell);
    else this.showStroke();
  }

  extend(cells) {
    this.stroke.cells.push(...cells);
    if (this.lettering.isOpen) this.lettering.drag(cells.at(-1));
    else this.showStroke();
  }

  strokeCells() {
    const { from, cells } = this.stroke;
    if (this.tool === "rectangle") return steps.rectangleCells(from, cells.at(-1));
    return this.tool === "fill" ? steps.areaAt(this.state, ...from) : cells;
  }

  showStroke() {
    this.chart.showPreview(this.strokeCells(), this.palette.allColours[this.slot]);
  }

  finish() {
    const cells = this.strokeCells();
    const inside = this.stroke.cells.filter((cell) => this.chart.has(cell));
    const end = this.tool === "fill" ? this.stroke.from : inside.at(-1);
    this.cancel();
    if (this.lettering.isOpen) return;
    this.paint(cells);
    this.moveTo(end);
  }

  cancel() {
    this.stroke = null;
    this.chart.showPreview([]);
    this.lettering.render();
  }

  paint(cells) {
    this.do((state) => steps.paint(state, cells, this.slot), `Painted ${this.slot}`);
  }

  pressed(event) {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    const way = this.wayOf(event.key);
    if (way) this.go(way, event.shiftKey);
    else if (this.lettering.isOpen && this.lettering.pressed(event.key)) this.chart.svg.focus();
    else if (!this.pressedOnCell(event.key)) return;
    event.preventDefault();
  }

  wayOf(key) {
    const ways = {
      ArrowUp: [-1, 0], ArrowDown: [1, 0], ArrowLeft: [0, -1], ArrowRight: [0, 1],
    };
    const [down, right] = ways[key] ?? [0, 0];
    if (ways[key]) return this.chart.isLying ? [right, -down] : [down, right];
    if (key === "PageUp" || key === "PageDown") return [key === "PageUp" ? -FAR_ROWS : FAR_ROWS, 0];
    const columns = this.state.rows[0].length;
    return { Home: [0, -columns], End: [0, columns] }[key] ?? null;
  }

  go([down, right], paints) {
    if (this.lettering.isOpen) return this.lettering.move(down, right);
    const { rows } = this.state;
    const [from, to] = [this.cursor, [
      Math.min(Math.max(this.cursor[0] + down, 0), rows.length - 1),
      Math.min(Math.max(this.cursor[1] + right, 0), rows[0].length - 1)]];
    if (paints) this.paint(steps.rectangleCells(from, to));
    this.moveTo(to);
    if (this.corner) this.showCorner();
    return undefined;
  }

  pressedOnCell(key) {
    if (/^[a-z]$/i.test(key)) {
      this.palette.choose(key.toUpperCase());
      this.paint([this.cursor]);
    } else if (key === "Delete" || key === "Backspace") {
      this.do((state) => steps.paint(state, [this.cursor], state.background), "Painted background");
    } else if (key === "Escape") this.dropCorner();
    else if (key === " " || key === "Enter") this.useTool();
    else return false;
    if (!this.corner) this.sayCell();
    return true;
  }

  useTool() {
    if (this.tool === "fill") this.paint(steps.areaAt(this.state, ...this.cursor));
    else if (this.tool !== "rectangle") this.paint([this.cursor]);
    else if (this.corner) {
      const cells = steps.rectangleCells(this.corner, this.cursor);
      this.dropCorner();
      this.paint(cells);
    } else {
      this.corner = this.cursor;
      this.showCorner();
      this.say("First corner. Go to the other corner and press the space bar.");
    }
  }

  showCorner() {
    this.chart.showPreview(steps.rectangleCells(this.corner, this.cursor),
      this.palette.allColours[this.slot]);
  }

  dropCorner() {
    this.corner = null;
    this.chart.showPreview([]);
  }

  // The steps of the buttons, by their data-step.
  step(name) {
    const [row, column] = this.cursor;
    const { limits, slot } = this;
    const size = (side) => Number(this.find(`[data-size=${side}]`).value);
    const named = {
      "mirror-left-right": ["Mirrored left and right", steps.mirrorLeftRight],
      "mirror-top-bottom": ["Mirrored start and end", steps.mirrorTopBottom],
      "shift-left": ["Shifted to the left", (state) => steps.shift(state, -1, 0)],
      "shift-right": ["Shifted to the right", (state) => steps.shift(state, 1, 0)],
      "shift-up": ["Shifted towards the start", (state) => steps.shift(state, 0, -1)],
      "shift-down": ["Shifted towards the end", (state) => steps.shift(state, 0, 1)],
      "repeat": ["Repeated the rows", (state) => steps.repeatRows(state, limits)],
      "repeat-mirrored": ["Repeated the rows mirrored",
        (state) => steps.repeatRows(state, limits, { mirrored: true })],
      "row-before": ["Added a row", (state) => steps.addRows(state, row, 1, limits)],
      "row-after": ["Added a row", (state) => steps.addRows(state, row + 1, 1, limits)],
      "row-out": ["Took out a row", (state) => steps.removeRows(state, row, 1, limits)],
      "column-left": ["Added a column", (state) => steps.addColumns(state, column, 1, limits)],
      "column-right": ["Added a column", (state) => steps.addColumns(state, column + 1, 1, limits)],
      "column-out": ["Took out a column", (state) => steps.removeColumns(state, column, 1, limits)],
      "size": ["Changed the size", (state) => steps.resize(state, size("rows"), size("columns"), limits)],
      "background": [`Background in ${slot}`, (state) => steps.setBackground(state, slot)],
      "replace": [`Changed a colour to ${slot}`,
        (state) => steps.replaceColour(state, state.rows[row][column], slot)],
      "clear": ["Cleared to the background", steps.clear],
    }[name];
    if (!named) return false;
    this.do(named[1], named[0]);
    return true;
  }
}
