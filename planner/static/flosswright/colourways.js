// A search draws the slots' lists anew. What was chosen while it was under way stays chosen.
"use strict";

document.addEventListener("htmx:oobBeforeSwap", (event) => {
  const { target, fragment } = event.detail;
  if (target.id !== "slot-choices") return;
  for (const select of target.querySelectorAll("select")) {
    const renewed = fragment.querySelector(`#${select.id}`);
    const chosen = select.selectedOptions[0];
    if (!renewed || !chosen) continue;
    if (!Array.from(renewed.options).some((option) => option.value === chosen.value)) {
      renewed.append(chosen.cloneNode(true));
    }
    renewed.value = chosen.value;
  }
});
