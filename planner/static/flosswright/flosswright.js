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

// A link that opens a place on the page closes it again at the second click.
document.addEventListener("htmx:beforeRequest", (event) => {
  const opener = event.detail.elt;
  if (!opener.dataset || !opener.dataset.opens) return;
  const place = document.getElementById(opener.dataset.opens);
  const isOpen = place.childElementCount > 0;
  if (isOpen) {
    event.preventDefault();
    place.replaceChildren();
    place.textContent = "";
  }
  opener.setAttribute("aria-expanded", String(!isOpen));
});
