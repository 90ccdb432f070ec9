// Small behaviours that every page shares; pages work without them.
"use strict";

// A form that waits says so and is sent once.
document.addEventListener("submit", (event) => {
  const form = event.target;
  if (event.defaultPrevented || form.dataset.sent) {
    if (form.dataset.sent) event.preventDefault();
    return;
  }
  if (form.dataset.waiting) {
    form.dataset.sent = "yes";
    const button = event.submitter;
    if (button) button.textContent = form.dataset.waiting;
  }
});
window.addEventListener("pageshow", () => {
  for (const form of document.querySelectorAll("form[data-sent]")) delete form.dataset.sent;
});
