// Keeps what is typed into a form with data-draft on this device until the server has it, so that
// an empty battery loses nothing. The page says with data-draft-done which draft is stored.
//
//   <p data-draft-notice hidden>... <time data-draft-time></time> <button data-draft-drop></p>
//   <form data-draft="key"> <input type="hidden" name="draft"> ... </form>

const PREFIX = "ampledger.draft.";
const OLDEST_MS = 7 * 24 * 3600 * 1000;

function read(key) {
  try {
    const draft = JSON.parse(localStorage.getItem(PREFIX + key));
    return draft && Date.now() - draft.at < OLDEST_MS ? draft : null;
  } catch {
    return null;
  }
}

function write(key, draft) {
  try {
    if (draft) localStorage.setItem(PREFIX + key, JSON.stringify(draft));
    else localStorage.removeItem(PREFIX + key);
  } catch {
    // The browser keeps nothing here; the form works all the same.
  }
}

const newId = () =>
  Array.from(crypto.getRandomValues(new Uint8Array(12)), (byte) => byte.toString(36)).join("");

const typed = (form) =>
  [...form.elements].filter((field) => field.matches("input[type=text], input[type=datetime-local]"));

function keep(form, key) {
  const fields = Object.fromEntries(typed(form).map((field) => [field.name, field.value]));
  const isEmpty = typed(form).every((field) => field.type !== "text" || field.value.trim() === "");
  write(key, isEmpty ? null : { id: form.elements.draft.value, at: Date.now(), fields });
}

function putBack(form, draft) {
  for (const field of typed(form)) {
    if (draft.fields[field.name]) field.value = draft.fields[field.name];
  }
  form.elements.draft.value = draft.id;
}

function tell(form, key, draft) {
  const notice = document.querySelector("[data-draft-notice]");
  const time = notice.querySelector("[data-draft-time]");
  const at = new Date(draft.at);
  time.dateTime = at.toISOString();
  time.textContent = at.toLocaleString("en-GB", {
    weekday: "short",
    day: "numeric",
    month: "short",
    hour: "2-digit",
    minute: "2-digit",
    timeZone: time.dataset.zone,
  });
  notice.hidden = false;
  notice.querySelector("[data-draft-drop]").addEventListener("click", () => {
    write(key, null);
    form.reset();
    form.elements.draft.value = newId();
    notice.hidden = true;
  });
}

const form = document.querySelector("form[data-draft]");
if (form) {
  const key = form.dataset.draft;
  const done = document.querySelector("[data-draft-done]")?.dataset.draftDone;
  let draft = read(key);
  if (draft && draft.id === done) {
    write(key, null);
    draft = null;
  }
  if (!form.elements.draft.value) form.elements.draft.value = draft?.id ?? newId();
  // What the server sent back is newer than what this device remembers.
  if (draft && !("typed" in form.dataset)) {
    putBack(form, draft);
    tell(form, key, draft);
  }
  form.addEventListener("input", () => keep(form, key));
  form.addEventListener("submit", () => keep(form, key));
  if ("typed" in form.dataset) keep(form, key);
}
