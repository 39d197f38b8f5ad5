// Asks once more before a form with data-confirm is sent. Without script it is sent at once.

const dialog = document.getElementById("confirm");

document.addEventListener("submit", (event) => {
  const form = event.target;
  const button = event.submitter;
  const question = button?.dataset.confirm ?? form.dataset.confirm;
  if (!question || form.dataset.confirmed || !dialog?.showModal) return;

  event.preventDefault();
  dialog.querySelector("p").textContent = question;
  dialog.returnValue = "no";
  dialog.addEventListener(
    "close",
    () => {
      if (dialog.returnValue !== "yes") return;
      form.dataset.confirmed = "yes";
      form.requestSubmit(button);
      delete form.dataset.confirmed;
    },
    { once: true },
  );
  dialog.showModal();
});
