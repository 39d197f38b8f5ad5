// Shows how far an upload has come. The form is an ordinary one and works without script.
// templates/parts/upload.html holds the bar and its words.

function send(form, button) {
  const progress = form.querySelector("[data-progress]");
  const bar = progress.querySelector("progress");
  const words = progress.querySelector("p");
  const request = new XMLHttpRequest();
  const whole = new FormData(form);
  if (button?.name) whole.append(button.name, button.value);

  const free = () => form.querySelectorAll("button").forEach((one) => (one.disabled = false));
  form.querySelectorAll("button").forEach((one) => (one.disabled = true));
  progress.hidden = false;
  bar.value = 0;

  request.upload.addEventListener("progress", (event) => {
    if (!event.lengthComputable) return;
    bar.value = event.loaded / event.total;
    const share = `${Math.floor((100 * event.loaded) / event.total)} %`;
    words.textContent = words.dataset.sending.replace("{share}", share);
  });
  request.upload.addEventListener("load", () => {
    bar.removeAttribute("value");
    words.textContent = words.dataset.reading;
  });
  request.addEventListener("error", () => {
    words.textContent = words.dataset.broken;
    free();
  });
  request.addEventListener("load", () => show(request));
  request.open(form.method, form.action);
  request.send(whole);
}

// Where the answer lies at another address, go there; else its main part takes the place of ours.
function show(request) {
  if (request.status < 400 && request.responseURL !== location.href) {
    location.assign(request.responseURL);
    return;
  }
  const answer = new DOMParser().parseFromString(request.responseText, "text/html");
  const main = answer.querySelector("main");
  if (!main) {
    location.reload();
    return;
  }
  document.querySelector("main").replaceWith(document.adoptNode(main));
  document.title = answer.title;
  main.focus();
}

document.addEventListener("submit", (event) => {
  if (event.defaultPrevented || !event.target.matches("form[data-upload]")) return;
  event.preventDefault();
  send(event.target, event.submitter);
});
