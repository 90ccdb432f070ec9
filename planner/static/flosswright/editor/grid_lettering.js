// The lettering tool: words are shown on the chart before they are set in.

import { insertPicture, makeRoom, pictureCells } from "./grid_steps.js";
import { Alphabet, LetteringError } from "./lettering.js";

export class LetteringPanel {
  // element: the <details> that holds the words; words stand on the chart while it is open.
  constructor(element, board) {
    this.element = element;
    this.board = board;
    this.alphabet = new Alphabet(JSON.parse(document.getElementById("alphabet").textContent));
    this.picture = null;
    this.place = [0, 0];
    element.addEventListener("toggle", () => this.toggled());
    element.addEventListener("input", () => this.write());
    element.addEventListener("change", () => this.write());
    this.find("[data-set-in]").addEventListener("click", () => this.setIn());
    this.find("[data-text]").addEventListener("keydown", (event) => {
      if (event.key !== "Enter") return;
      event.preventDefault(); // not the form's main action
      this.setIn();
    });
  }

  find(selector) {
    return this.element.querySelector(selector);
  }

  get isOpen() {
    return this.element.open && this.picture !== null;
  }

  toggled() {
    this.write();
    if (this.element.open) this.find("[data-text]").focus();
  }

  write() {
    const text = this.find("[data-text]").value;
    this.picture = null;
    this.find("[data-words-said]").textContent = "";
    if (this.element.open && text.trim()) this.spell(text);
    this.board.showTool();
    this.render();
  }

  spell(text) {
    const height = Number(this.find("[data-height]:checked").value);
    const direction = this.find("[data-direction]:checked").value;
    try {
      this.picture = this.alphabet.write(text, height, direction);
    } catch (error) {
      if (!(error instanceof LetteringError)) throw error;
      this.find("[data-words-said]").textContent = error.message;
      return;
    }
    this.place = this.middle(this.board.state);
    if (this.fits) this.board.chart.reveal(this.place);
  }

  get size() {
    return [this.picture.length, this.picture[0].length];
  }

  get fits() {
    const { rows } = this.board.state;
    return this.size[0] <= rows.length && this.size[1] <= rows[0].length;
  }

  middle({ rows }) {
    return [Math.max(0, Math.floor((rows.length - this.size[0]) / 2)),
      Math.max(0, Math.floor((rows[0].length - this.size[1]) / 2))];
  }

  render() {
    const button = this.find("[data-set-in]");
    button.disabled = this.picture === null;
    if (this.picture === null) return this.board.chart.showPreview([]);
    this.place = this.within(this.place);
    const { rows } = this.board.state;
    button.textContent = this.fits ? "Set the words in" : "Make room and set the words in";
    this.find("[data-words-said]").textContent = `The words take ${this.size[0]} rows and`
      + ` ${this.size[1]} columns; the pattern has ${rows.length} and ${rows[0].length}.`;
    return this.board.chart.showPreview(pictureCells(this.picture, ...this.place),
      this.board.palette.allColours[this.board.slot]);
  }

  within([row, column]) {
    const { rows } = this.board.state;
    const inside = (at, taken, size) => Math.max(0, Math.min(at, size - taken));
    return [inside(row, this.size[0], rows.length), inside(column, this.size[1], rows[0].length)];
  }

  // A finger takes the words where it lies, or else brings their first cell to itself.
  grip([row, column]) {
    const [down, right] = [row - this.place[0], column - this.place[1]];
    const isOn = down >= 0 && right >= 0 && down < this.size[0] && right < this.size[1];
    this.held = isOn ? [down, right] : [0, 0];
    this.drag([row, column]);
  }

  drag([row, column]) {
    this.place = [row - this.held[0], column - this.held[1]];
    this.render();
  }

  move(down, right) {
    this.place = this.within([this.place[0] + down, this.place[1] + right]);
    this.render();
    this.board.chart.reveal(this.place);
    this.board.say(`The words begin in row ${this.place[0] + 1}, column ${this.place[1] + 1}`);
  }

  // Keys on the chart while the words lie there; says whether it took the key.
  pressed(key) {
    if (key === "Enter") this.setIn();
    else if (key === "Escape") this.element.open = false;
    else return false;
    return true;
  }

  setIn() {
    if (this.picture === null) return;
    const { board, picture } = this;
    const text = this.find("[data-text]").value.trim();
    const [rows, columns] = this.size;
    const isIn = board.do((state) => {
      if (this.fits) return insertPicture(state, picture, ...this.place, board.slot);
      const roomy = makeRoom(state, this.roomFor(rows, state.rows.length),
        this.roomFor(columns, state.rows[0].length), board.limits);
      return insertPicture(roomy, picture, ...this.middle(roomy), board.slot);
    }, `Set in “${text}”`);
    if (!isIn) return;
    this.find("[data-text]").value = "";
    this.write();
  }

  // Where room has to be made, a cell of background stays on either side.
  roomFor(taken, size) {
    return taken <= size ? size : taken + 2;
  }
}
