// The editor's page: picks the board, and wires buttons, keys, preview, saving and leaving.

import { GridBoard } from "./grid_board.js";
import { KnotBoard } from "./knot_board.js";
import { Preview } from "./preview.js";
import { NotReached, post } from "./server.js";
import { EditingSession } from "./session.js";

const BOARDS = { diagonal: KnotBoard, grid: GridBoard };
const page = document.querySelector("[data-editor]");
const find = (selector) => page.querySelector(selector);
const given = JSON.parse(document.getElementById("editor-data").textContent);

// Shown first, because a board fits its size to its box.
find("[data-begin]").hidden = true;
find("[data-bench]").hidden = false;

const session = new EditingSession({
  key: given.key, start: given.state, version: given.version, onChange: () => show(),
});
const board = new BOARDS[given.state.technique](session, find("[data-board]"), given);
const preview = new Preview({
  url: given.preview_url,
  box: find("[data-preview]"),
  choice: find("[data-choice]"),
  status: find("[data-connection]"),
  stateOf: () => session.state,
  onProblem: (problem) => showProblem(problem),
});
const fields = [...page.querySelectorAll("[data-field]")];
let isSaving = false;

function show() {
  preview.follow(); // the server works while the board is drawn
  board.render();
  showFields();
  showButtons();
  showNotices();
}

function takeIn(field) {
  const name = field.dataset.field;
  session.do({ ...session.state, [name]: field.value }, `Changed the ${field.dataset.words}`);
}

function showFields() {
  for (const field of fields) {
    const value = session.state[field.dataset.field];
    if (field.value !== value && document.activeElement !== field) field.value = value;
  }
}

function showButtons() {
  const [undo, redo] = [find("[data-undo]"), find("[data-redo]")];
  undo.disabled = !session.canUndo;
  redo.disabled = !session.canRedo;
  undo.title = session.undoLabel && `Takes back: ${session.undoLabel}`;
  redo.title = session.redoLabel && `Does again: ${session.redoLabel}`;
  find("[data-steps]").textContent = session.at;
  find("[data-steps-word]").textContent = session.at === 1 ? "step" : "steps";
  find("[data-unsaved]").hidden = !session.isDirty;
}

function showNotices() {
  const { restored } = session;
  find("[data-restored]").hidden = !restored;
  if (restored) {
    const when = restored.when.toLocaleString([], { dateStyle: "medium", timeStyle: "short" });
    find("[data-restored-words]").textContent = `Your unsaved work of ${when} is back, with every step.` +
      (restored.isOlder ? " The pattern was saved elsewhere since you began it." : "");
  }
  find("[data-elsewhere]").hidden = !session.isOpenElsewhere;
  find("[data-not-kept]").hidden = session.isKept;
}

function showProblem(problem) {
  const line = find("[data-problem]");
  line.hidden = !problem;
  line.textContent = problem?.message ?? "";
}

// Undo and redo put the cursor's words aside: what was taken back is said instead.
function back() {
  const label = session.undo();
  board.say(label ? `Taken back: ${label}` : "There is nothing to take back.");
}

function again() {
  const label = session.redo();
  board.say(label ? `Done again: ${label}` : "There is nothing to do again.");
}

async function save({ asNew = false } = {}) {
  if (isSaving) return;
  isSaving = true;
  fields.forEach(takeIn); // what is being typed counts
  const state = session.state;
  tell("Saving …");
  try {
    const { status, data } = await post(asNew ? given.new_url : given.save_url,
      JSON.stringify({ state, version: session.version }));
    if (status === 200) saved(data, state);
    else refused(status, data);
  } catch (error) {
    if (!(error instanceof NotReached)) throw error;
    session.store();
    const kept = session.isKept
      ? "Nothing is lost: your work is kept in this browser. Save again when it is back."
      : "This browser keeps nothing: leave this page open, and save again when it is back.";
    tell(`Not saved. ${error.message} ${kept}`, true);
  } finally {
    isSaving = false;
  }
}

function saved(data, state) {
  session.markSaved(data.version, state);
  hideConflict();
  tell(data.words);
  const link = find("[data-saved-link]");
  link.hidden = false;
  link.href = data.url;
  showName(data.name);
  if (data.edit_url !== window.location.pathname) moved(data);
}

// A new pattern has an address of its own from here on, and its steps go along.
function moved(data) {
  session.moveTo(data.key);
  window.history.replaceState(null, "", data.edit_url);
  given.save_url = data.edit_url;
  find("[data-beside]").hidden = false;
}

function showName(name) {
  const heading = document.querySelector("h1");
  heading.replaceChildren("How is ", Object.assign(document.createElement("bdi"), { textContent: name }), " tied?");
  document.title = document.title.replace(/^.*?(?= · )/, `Draw ${name}`);
}

function refused(status, data) {
  if (!data) {
    tell("This pattern is not in your library any more. Save yours as a new pattern.", true);
    return;
  }
  tell(data.message, true);
  if (status === 409) {
    find("[data-conflict]").hidden = false;
    find("[data-theirs]").href = data.url;
  }
  if (data.row) board.point?.(data.row - 1, (data.knot ?? 1) - 1);
}

const hideConflict = () => { find("[data-conflict]").hidden = true; };

function tell(words, isProblem = false) {
  const line = find("[data-saved]");
  line.textContent = words;
  line.classList.toggle("problem", isProblem);
  find("[data-saved-link]").hidden = true;
}

function clicked(event) {
  const button = event.target.closest("button");
  if (!button || !page.contains(button)) return;
  const { step } = button.dataset;
  if (step) board.step(step);
  else if ("undo" in button.dataset) back();
  else if ("redo" in button.dataset) again();
  else if ("save" in button.dataset) save();
  else if ("asNew" in button.dataset) save({ asNew: true });
  else if ("forget" in button.dataset) session.forget(given.state, given.version);
}

function pressed(event) {
  if (!(event.ctrlKey || event.metaKey) || event.altKey) return;
  const isTyping = event.target.matches("input:not([type=radio]), textarea");
  const key = event.key.toLowerCase();
  if (key === "s") save();
  else if (isTyping) return;
  else if (key === "z" && !event.shiftKey) back();
  else if (key === "y" || (key === "z" && event.shiftKey)) again();
  else return;
  event.preventDefault();
}

for (const field of fields) field.addEventListener("change", () => takeIn(field));
// A colourway that is chosen colours the board too.
find("[data-choice]").addEventListener("change", ({ target }) => {
  if (target.name !== "colourway") return;
  Object.assign(board, given.colourways[target.value] ?? { colours: {}, names: {} });
  board.render();
});
page.addEventListener("click", clicked);
document.addEventListener("keydown", pressed);
window.addEventListener("beforeunload", (event) => {
  fields.forEach(takeIn);
  if (session.isDirty) event.preventDefault();
});
show();
