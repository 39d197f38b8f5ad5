// Keeps an open page as the books are: when the server tells that something changed, the page is
// fetched once more and its parts with data-live are made like the new ones. Nothing moves while a
// form holds what is not sent yet. Without script, or without a line, the page stays as it came.

import { morph } from "./morph.js";

const LOOK_AGAIN_MS = 2000; // While somebody types.
const COME_AGAIN_MS = 60000; // After the server has turned the page away.
const SHORTEST_PAUSE_MS = 500;
const PAUSE_TIMES = 4; // A page that takes long to fetch is fetched so much more seldom.

const { liveEvents: address, liveToken } = document.body.dataset;
let known = liveToken;
let isStale = false;
let isBusy = false;
let source = null;
let timer = 0;
let rests = false;

function isChanged(field) {
  if (field.type === "hidden") return false;
  if (field.type === "checkbox" || field.type === "radio") {
    return field.checked !== field.defaultChecked;
  }
  if (field.type === "select-one") {
    const first = [...field.options].findIndex((option) => option.defaultSelected);
    return field.options.length > 0 && field.selectedIndex !== Math.max(first, 0);
  }
  return "defaultValue" in field && field.value !== field.defaultValue;
}

const isHeldUp = () =>
  document.querySelector("dialog[open]") !== null ||
  [...document.querySelectorAll("main input, main select, main textarea")].some(isChanged);

const drawings = () => [...document.querySelectorAll("[data-live] [data-figure]")];

const data = (drawing) =>
  drawing.parentElement.querySelector("script[type='application/json']")?.textContent;

function showNew(page) {
  const before = new Map(drawings().map((drawing) => [drawing, data(drawing)]));
  const focused = document.activeElement;
  for (const part of document.querySelectorAll("[data-live]")) {
    const fresh = page.querySelector(`[data-live="${part.dataset.live}"]`);
    if (fresh) morph(part, fresh);
  }
  for (const drawing of drawings()) {
    if (drawing.dataset.src || before.get(drawing) !== data(drawing)) {
      drawing.dispatchEvent(new Event("figure:changed", { bubbles: true }));
    }
  }
  if (document.activeElement !== focused) {
    const there = focused.isConnected ? focused : document.getElementById("content");
    there.focus({ preventScroll: true });
  }
}

function later(wait) {
  rests = true;
  clearTimeout(timer);
  timer = setTimeout(() => {
    rests = false;
    refresh();
  }, wait);
}

async function refresh() {
  if (isBusy || rests || !isStale || document.hidden) return;
  if (isHeldUp()) {
    later(LOOK_AGAIN_MS);
    return;
  }
  isBusy = true;
  isStale = false;
  const began = performance.now();
  try {
    const answer = await fetch(location.href, { headers: { accept: "text/html" } });
    if (answer.redirected) {
      leave(); // Whoever was signed in is so no more.
    } else if (answer.ok) {
      const page = new DOMParser().parseFromString(await answer.text(), "text/html");
      if (isHeldUp()) {
        isStale = true;
      } else if (page.body.dataset.liveToken) {
        showNew(page);
        known = page.body.dataset.liveToken;
      }
    }
  } catch {
    isStale = true; // The line broke, or the reader leaves.
  }
  isBusy = false;
  const pause = Math.max(SHORTEST_PAUSE_MS, PAUSE_TIMES * (performance.now() - began));
  later(isStale ? Math.max(LOOK_AGAIN_MS, pause) : pause);
}

function hear({ data: token }) {
  if (token !== known) isStale = true;
  refresh();
}

function listen() {
  if (source || document.hidden) return;
  source = new EventSource(address);
  source.addEventListener("changed", hear);
  source.addEventListener("error", () => {
    // While it is only interrupted, the browser comes again by itself.
    if (source?.readyState !== EventSource.CLOSED) return;
    leave();
    setTimeout(listen, COME_AGAIN_MS);
  });
}

function leave() {
  source?.close();
  source = null;
}

const isSparing =
  matchMedia("(prefers-reduced-data: reduce)").matches || navigator.connection?.saveData;

if (address && "EventSource" in window && !isSparing) {
  // A page that nobody sees keeps no line open: a browser has only six to one server.
  document.addEventListener("visibilitychange", () => (document.hidden ? leave() : listen()));
  listen();
}
