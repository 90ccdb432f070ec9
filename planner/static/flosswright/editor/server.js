// What the editor asks of the workshop's server.

export class NotReached extends Error {}

const token = () => JSON.parse(document.body.getAttribute("hx-headers"))["x-csrftoken"];

// Post a text of JSON; gives {status, data} or {status, html}. No network, and a session that has ended, are
// NotReached: nothing was saved, and it can be tried again.
export async function post(url, text, signal) {
  let response;
  try {
    response = await fetch(url, {
      method: "POST",
      headers: { "Content-Type": "application/json", "X-CSRFToken": token(), "X-Editor": "yes" },
      body: text,
      redirect: "manual",
      signal,
    });
  } catch (error) {
    if (error.name === "AbortError") throw error;
    throw new NotReached("The workshop cannot be reached.");
  }
  if (response.type === "opaqueredirect" || response.status === 403) {
    throw new NotReached("You are signed out. Sign in again in another window.");
  }
  if (response.status >= 500) throw new NotReached("The workshop could not answer.");
  const isJson = response.headers.get("Content-Type")?.startsWith("application/json");
  return { status: response.status, ...(isJson ? { data: await response.json() } : { html: await response.text() }) };
}
