// The order grid by keyboard: Enter and arrows move, many pasted cells fill it from where you are.
"use strict";
(() => {
  const grid = document.querySelector("[data-grid]");
  if (!grid) return;
  const body = grid.tBodies[0];
  const form = grid.closest("form");
  const state = form.querySelector("[data-grid-state]");
  const more = form.querySelector("[data-grid-more]");
  let unsaved = Boolean(grid.querySelector(".cell-wrong"));

  const cellsOf = (row) => [...row.querySelectorAll("input[data-field]")];
  const rows = () => [...body.querySelectorAll("tr[data-row]")];
  const lastRow = () => rows().at(-1);

  function say(text) {
    if (state) state.textContent = text;
  }

  function changed() {
    unsaved = true;
    say("Not saved yet");
  }

  function move(input, down, right) {
    const row = input.closest("tr");
    const column = cellsOf(row).indexOf(input);
    const target = rows()[rows().indexOf(row) + down];
    const cell = target && cellsOf(target)[column + right];
    if (!cell) return false;
    cell.focus();
    cell.select();
    return true;
  }

  function addRow() {
    const last = lastRow();
    const number = Number(last.dataset.row) + 1;
    const row = last.cloneNode(true);
    row.dataset.row = number;
    row.id = `row-${number}`;
    row.className = "";
    const head = row.querySelector("th");
    head.textContent = number;
    for (const cell of row.querySelectorAll(".cell-wrong")) cell.classList.remove("cell-wrong");
    for (const input of row.querySelectorAll("input")) {
      input.name = input.name.replace(/^row-\d+-/, `row-${number}-`);
      input.removeAttribute("aria-invalid");
      input.removeAttribute("aria-describedby");
      if (input.type === "checkbox") input.checked = false;
      else input.value = "";
      const label = input.getAttribute("aria-label");
      if (label) input.setAttribute("aria-label", label.replace(/^Row \d+/, `Row ${number}`));
    }
    const hidden = row.querySelector(".visually-hidden");
    if (hidden) hidden.textContent = ` row ${number}`;
    body.append(row);
    return row;
  }

  grid.addEventListener("keydown", (event) => {
    const input = event.target.closest("input[data-field]");
    if (!input || event.altKey || event.ctrlKey || event.metaKey || event.isComposing) return;
    const start = input.selectionStart === 0 && input.selectionEnd === 0;
    const end = input.selectionStart === input.value.length && input.selectionEnd === input.value.length;
    const whole = input.selectionStart === 0 && end === false && input.selectionEnd === input.value.length;
    const steps = {
      Enter: [event.shiftKey ? -1 : 1, 0],
      ArrowDown: [1, 0],
      ArrowUp: [-1, 0],
      ArrowLeft: start || whole ? [0, -1] : null,
      ArrowRight: end || whole ? [0, 1] : null,
    };
    const step = steps[event.key];
    if (!step) return;
    if (event.key === "Enter" && more && !event.shiftKey && input.closest("tr") === lastRow()) addRow();
    if (move(input, step[0], step[1]) || event.key === "Enter") event.preventDefault();
  });

  // The colourways suggested are those of the row's pattern.
  grid.addEventListener("focusin", (event) => {
    const input = event.target;
    if (input.dataset.field !== "colourway") return;
    const pattern = input.closest("tr").querySelector('[data-field="pattern"]').value.trim().toLowerCase();
    for (const option of document.querySelectorAll("#all-patterns option")) {
      if (option.value.toLowerCase() === pattern) {
        input.setAttribute("list", `colourways-${option.dataset.key}`);
        return;
      }
    }
    input.removeAttribute("list");
  });

  function readCells(text) {
    const found = [[""]];
    let quoted = false;
    for (let i = 0; i < text.length; i += 1) {
      const sign = text[i];
      const row = found[found.length - 1];
      if (quoted) {
        if (sign === '"' && text[i + 1] === '"') { row[row.length - 1] += '"'; i += 1; }
        else if (sign === '"') quoted = false;
        else row[row.length - 1] += sign;
      } else if (sign === '"' && row[row.length - 1] === "") quoted = true;
      else if (sign === "\t") row.push("");
      else if (sign === "\n") found.push([""]);
      else if (sign !== "\r") row[row.length - 1] += sign;
    }
    if (found.length > 1 && found[found.length - 1].join("") === "") found.pop();
    return found;
  }

  grid.addEventListener("paste", (event) => {
    const input = event.target.closest("input[data-field]");
    const text = event.clipboardData && event.clipboardData.getData("text/plain");
    if (!input || !text || !/[\t\n]/.test(text.replace(/\r?\n$/, ""))) return;
    event.preventDefault();
    const pasted = readCells(text);
    const firstColumn = cellsOf(input.closest("tr")).indexOf(input);
    let index = rows().indexOf(input.closest("tr"));
    for (const cells of pasted) {
      const row = rows()[index] || (more ? addRow() : null);
      if (!row) break;
      const targets = cellsOf(row);
      cells.forEach((value, offset) => {
        const target = targets[firstColumn + offset];
        if (target) target.value = value.replace(/\s*\n\s*/g, " ");
      });
      index += 1;
    }
    changed();
    say(`${pasted.length} rows pasted, not saved yet`);
  });

  grid.addEventListener("input", changed);
  grid.addEventListener("click", (event) => {
    const use = event.target.closest("button[data-use]");
    if (!use || !more) return;
    event.preventDefault();
    const input = body.querySelector(`[name="${use.dataset.for}"]`);
    input.value = use.dataset.use;
    input.closest("td").classList.remove("cell-wrong");
    input.focus();
    use.closest("p").remove();
    changed();
  });
  if (more) {
    more.hidden = false;
    more.addEventListener("click", () => {
      const first = addRow();
      for (let i = 1; i < 10; i += 1) addRow();
      cellsOf(first)[0].focus();
    });
  }
  form.addEventListener("submit", () => { unsaved = false; });
  const planForm = document.querySelector("[data-needs-saved]");
  if (planForm) {
    planForm.form.addEventListener("submit", (event) => {
      if (!unsaved) return;
      event.preventDefault();
      say("Save the orders first: the plan is made from what is saved.");
      form.querySelector("[data-grid-save]").focus();
    }, true);
  }
  window.addEventListener("beforeunload", (event) => {
    if (unsaved) event.preventDefault();
  });
})();
