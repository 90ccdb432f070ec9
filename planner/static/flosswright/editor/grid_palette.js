// The colours to paint with: one choice a slot, with its swatch, its letter and its shade.

import { inkOn } from "./grid_chart.js";
import { neutralColours } from "./tones.js";

const LETTERS = [..."ABCDEFGHIJKLMNOPQRSTUVWXYZ"];
// Slots that are not tied yet are shown in tones of undyed thread; their letters tell them apart.
const NO_SHADE = ["#f1e9da", "#5c5448", "#a8a297", "#7d7468", "#cdc4b4"];

export class GridPalette {
  constructor(element, board) {
    this.element = element;
    this.board = board;
    this.added = new Set();
    const { background, rows } = board.state;
    this.slot = rows.flat().find((slot) => slot !== background) ?? "B";
    this.added.add(this.slot);
    this.drawn = "";
    element.addEventListener("change", (event) => this.choose(event.target.value));
    board.element.querySelector("[data-more-colours]").addEventListener("click", () => this.more());
  }

  get allColours() {
    const { background, rows } = this.board.state;
    const shown = { ...neutralColours([background, ...rows.flat()]), ...this.board.colours };
    return Object.fromEntries(LETTERS.map((slot, place) =>
      [slot, shown[slot] ?? NO_SHADE[place % NO_SHADE.length]]));
  }

  get slots() {
    const { background, rows } = this.board.state;
    const used = new Set([background, ...rows.flat(), ...this.added]);
    return LETTERS.filter((slot) => used.has(slot) || this.board.names[slot]);
  }

  choose(slot) {
    this.slot = slot;
    this.added.add(slot);
    this.render();
  }

  more() {
    const next = LETTERS.find((slot) => !this.slots.includes(slot));
    if (next) this.choose(next);
    this.element.querySelector(":checked").focus();
  }

  // Built anew only where a choice comes, goes or looks different: a choice keeps its focus.
  render() {
    const choices = this.slots.map((slot) => ({ slot, colour: this.allColours[slot],
      words: this.board.wordsFor(slot) }));
    const wanted = JSON.stringify(choices);
    if (wanted !== this.drawn) {
      const hadFocus = this.element.contains(document.activeElement);
      this.element.replaceChildren(...choices.map(choiceOf));
      this.drawn = wanted;
      if (hadFocus) this.element.querySelector(`[value=${this.slot}]`).focus();
    }
    this.element.querySelector(`[value=${this.slot}]`).checked = true;
  }
}

function choiceOf({ slot, colour, words }) {
  const choice = document.createElement("label");
  choice.className = "grid-colour";
  const input = Object.assign(document.createElement("input"),
    { type: "radio", name: "grid-slot", value: slot });
  const swatch = document.createElementNS("http://www.w3.org/2000/svg", "svg");
  swatch.setAttribute("viewBox", "0 0 24 24");
  swatch.setAttribute("aria-hidden", "true");
  const [square, letter] = ["rect", "text"].map((name) =>
    swatch.appendChild(document.createElementNS("http://www.w3.org/2000/svg", name)));
  for (const [name, value] of [["width", 24], ["height", 24], ["fill", colour]]) {
    square.setAttribute(name, value);
  }
  for (const [name, value] of [["x", 12], ["y", 17], ["text-anchor", "middle"],
    ["fill", inkOn(colour)]]) letter.setAttribute(name, value);
  letter.textContent = slot;
  choice.append(input, swatch, Object.assign(document.createElement("span"), { textContent: words }));
  return choice;
}
