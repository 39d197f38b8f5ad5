// Makes one piece of a page like another by changing no more than differs, so that focus, scroll,
// selections and open details stay. Items of lists, rows and links are known by where they lead.

// What the reader or a script has set by now, and the server knows nothing of.
const KEPT = new Set(["hidden", "open"]);

function keyOf(node) {
  if (node.nodeType !== Node.ELEMENT_NODE) return "";
  if (node.id) return `#${node.id}`;
  const link = node.matches("li, tr") ? node.querySelector("a[href]") : node;
  return link?.getAttribute("href") ?? "";
}

function attributes(old, fresh) {
  for (const { name, value } of [...fresh.attributes]) {
    if (!KEPT.has(name) && old.getAttribute(name) !== value) old.setAttribute(name, value);
  }
  for (const { name } of [...old.attributes]) {
    if (!KEPT.has(name) && !fresh.hasAttribute(name)) old.removeAttribute(name);
  }
  if (old.matches("input, textarea") && old.value !== old.defaultValue) {
    old.value = old.defaultValue;
  }
}

function isAlike(old, fresh) {
  return old.nodeType === fresh.nodeType && old.nodeName === fresh.nodeName && !keyOf(old);
}

function children(old, fresh) {
  const wanted = new Set([...fresh.childNodes].map(keyOf));
  const known = new Map();
  for (const child of old.children) {
    const key = keyOf(child);
    if (key) known.set(key, [...(known.get(key) ?? []), child]);
  }
  let place = old.firstChild;
  for (const next of [...fresh.childNodes]) {
    // What goes is taken out first, so that what stays need not be moved past it.
    while (place && keyOf(place) && !wanted.has(keyOf(place))) {
      const gone = place;
      place = place.nextSibling;
      gone.remove();
    }
    const key = keyOf(next);
    const match = key ? known.get(key)?.shift() : place && isAlike(place, next) ? place : null;
    if (!match || match.nodeName !== next.nodeName) {
      old.insertBefore(document.importNode(next, true), place);
      continue;
    }
    if (match === place) place = place.nextSibling;
    else old.insertBefore(match, place);
    morph(match, next);
  }
  while (place) {
    const gone = place;
    place = place.nextSibling;
    gone.remove();
  }
}

export function morph(old, fresh) {
  if (old.nodeType !== Node.ELEMENT_NODE) {
    if (old.nodeValue !== fresh.nodeValue) old.nodeValue = fresh.nodeValue;
    return;
  }
  if (old.isEqualNode(fresh)) return;
  if ("figure" in (old.dataset ?? {})) {
    // What is drawn in it is Plotly's.
    for (const name of ["aria-label", "data-src"]) {
      if (fresh.hasAttribute(name)) old.setAttribute(name, fresh.getAttribute(name));
    }
    return;
  }
  attributes(old, fresh);
  children(old, fresh);
}
