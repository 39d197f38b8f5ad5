// Draws every <div data-figure> with Plotly: from the JSON beside it, or from the address in
// data-src. Colours are exchanged for those of the scheme in use; the table beside it says the same.

// The light scheme's colours, as server/figures/layout.py sends them; a test compares them.
const TOKENS = {
  "#f8f8f6": "sheet",
  "#1c1e20": "ink",
  "#5d6164": "quiet",
  "#cdcdc8": "line",
  "#e7e7e3": "pale",
  "#4d5357": "trace",
  "#74797c": "second",
  "#b4b5b1": "hatch",
  "#b9bcbb": "bar",
  "#b8400a": "low",
  "#0b63a5": "high",
};
const NARROW = 560;
const INSIDE = { xanchor: "right", xshift: -2, yanchor: "bottom", yshift: 2, borderpad: 0 };
const AHEAD = "400px";

const dark = matchMedia("(prefers-color-scheme: dark)");
const touch = matchMedia("(hover: none)");
const figures = new Map();

// Plotly's style sheet is ours (static/css/plotly.css): this mark keeps it from writing its own.
function keepPlotlyFromStyling() {
  const mark = document.createElement("meta");
  mark.id = "plotly.js-style-global";
  mark.className = "no-inline-styles";
  document.head.append(mark);
}

let loading;
function plotly() {
  loading ??= new Promise((resolve, reject) => {
    keepPlotlyFromStyling();
    const script = document.createElement("script");
    script.src = document.getElementById("plotly").href;
    script.addEventListener("load", () => resolve(window.Plotly));
    script.addEventListener("error", reject);
    document.head.append(script);
  });
  return loading;
}

async function told(drawing) {
  if (drawing.dataset.src) {
    const answer = await fetch(drawing.dataset.src, { headers: { accept: "application/json" } });
    if (!answer.ok) throw new Error(`${drawing.dataset.src}: ${answer.status}`);
    return answer.json();
  }
  return JSON.parse(drawing.parentElement.querySelector("script[type='application/json']").text);
}

// The same figure with each colour as the tokens of the scheme in use have it.
function coloured(part, tokens) {
  if (typeof part === "string") {
    const name = TOKENS[part];
    return name ? tokens.getPropertyValue(`--${name}`).trim() : part;
  }
  if (Array.isArray(part)) return part.map((one) => coloured(one, tokens));
  if (part === null || typeof part !== "object" || "bdata" in part) return part;
  return Object.fromEntries(
    Object.entries(part).map(([key, value]) => [key, coloured(value, tokens)]),
  );
}

// On a narrow screen the words at the ends of lines move inside, and the margin goes.
function fitted(layout, width, separators) {
  const fit = { ...layout, width, separators, uirevision: "kept" };
  if (touch.matches) fit.dragmode = false;
  if (width >= NARROW) return fit;
  fit.margin = { ...layout.margin, l: 46, r: 10 };
  fit.annotations = layout.annotations.map((one) =>
    one.name === "side"
      ? { ...one, ...INSIDE, bgcolor: layout.hoverlabel.bgcolor, opacity: 0.9 }
      : one,
  );
  return fit;
}

function draw(drawing) {
  const figure = figures.get(drawing);
  const width = Math.floor(drawing.clientWidth);
  if (!figure || width === 0) return;
  const locale = JSON.parse(document.getElementById("plotly-locale").text);
  const { data, layout } = coloured(figure, getComputedStyle(document.documentElement));
  window.Plotly.react(drawing, data, fitted(layout, width, locale.separators), {
    displayModeBar: false,
    doubleClick: "reset",
    showTips: false,
    responsive: false,
    locale: locale.locale,
    locales: locale.locales,
  });
}

// Once the reader has zoomed in, a button leads back to the whole period.
function letBack(drawing) {
  const whole = drawing.parentElement.querySelector(".whole");
  if (!whole) return;
  drawing.on("plotly_relayout", (change) => {
    if ("xaxis.range[0]" in change) whole.hidden = false;
    if ("xaxis.autorange" in change) whole.hidden = true;
  });
  drawing.on("plotly_doubleclick", () => (whole.hidden = true));
  whole.querySelector("button").addEventListener("click", () => {
    window.Plotly.relayout(drawing, { "xaxis.range": [...figures.get(drawing).layout.xaxis.range] });
    whole.hidden = true;
  });
}

async function start(drawing) {
  try {
    const [figure] = await Promise.all([told(drawing), plotly()]);
    figures.set(drawing, figure);
    draw(drawing);
    letBack(drawing);
    widths.observe(drawing);
    drawing.dataset.drawn = "";
  } catch (error) {
    drawing.hidden = true;
    drawing.parentElement.querySelector(".failed").hidden = false;
    drawing.parentElement.querySelector("details")?.setAttribute("open", "");
    console.warn(error);
  }
}

// What live.js has changed beneath a figure, or a figure that is new on the page.
async function anew(drawing) {
  if (!figures.has(drawing)) {
    near.observe(drawing);
    return;
  }
  try {
    figures.set(drawing, await told(drawing));
    draw(drawing);
  } catch (error) {
    console.warn(error);
  }
}

const widths = new ResizeObserver((changes) => {
  requestAnimationFrame(() => {
    for (const { target } of changes) {
      if (Math.floor(target.clientWidth) !== target.layout?.width) draw(target);
    }
  });
});

const near = new IntersectionObserver(
  (changes) => {
    for (const { target, isIntersecting } of changes) {
      if (!isIntersecting) continue;
      near.unobserve(target);
      start(target);
    }
  },
  { rootMargin: AHEAD },
);

dark.addEventListener("change", () => [...figures.keys()].forEach(draw));
document.addEventListener("figure:changed", ({ target }) => anew(target));
document.querySelectorAll("[data-figure]").forEach((drawing) => near.observe(drawing));
