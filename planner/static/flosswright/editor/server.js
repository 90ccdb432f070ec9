// What the editor asks of the workshop's server.

const UNREACHED = "The workshop cannot be reached.";
const SIGNED_OUT = "You are signed out. Sign in again in another window.";

// Nothing was saved; it can be tried again. The message is for the maker.
export class NotReached extends Error {}

// Post a text of JSON; gives {status, data} or {status, html}. No network, a server that cannot
// answer, and a session that has ended are NotReached.
export async function post(url, text, signal) {
  let response = await send(url, text, signal);
  if (response.status === 403 && await renewToken()) response = await send(url, text, signal);
  if (response.type === "opaqueredirect" || response.status === 403) throw new NotReached(SIGNED_OUT);
  if (response.status >= 500) throw new NotReached("The workshop could not answer.");
  const isJson = response.headers.get("Content-Type")?.startsWith("application/json");
  const body = await reached(response.text());
  return { status: response.status, ...(isJson ? { data: JSON.parse(body) } : { html: body }) };
}

function send(url, text, signal) {
  const headers = { "Content-Type": "application/json", "X-CSRFToken": token() };
  return reached(fetch(url, { method: "POST", headers, body: text, redirect: "manual", signal }));
}

async function reached(promise) {
  try {
    return await promise;
  } catch (error) {
    if (error.name === "AbortError") throw error;
    throw new NotReached(UNREACHED);
  }
}

const token = () => JSON.parse(document.body.getAttribute("hx-headers"))["x-csrftoken"];

// Signing in again, in another window, gives all windows another token: this page's new one.
async function renewToken() {
  const response = await reached(fetch(window.location.href, { redirect: "manual" }));
  if (!response.ok) return false;
  const fresh = new DOMParser().parseFromString(await reached(response.text()), "text/html");
  document.body.setAttribute("hx-headers", fresh.body.getAttribute("hx-headers"));
  return true;
}
