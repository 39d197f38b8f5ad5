// Enter goes to the next number of a form with data-enter, and after the last one to its button.
// Cells that are out of service (data-skip) are passed over; they can still be tapped.

document.addEventListener("keydown", (event) => {
  const form = event.target.closest?.("form[data-enter]");
  const isField = event.target.matches?.("input:not([type=checkbox], [type=radio])");
  if (event.key !== "Enter" || event.isComposing || !form || !isField) return;

  event.preventDefault();
  const fields = [...form.querySelectorAll("input[inputmode=decimal]")];
  const after = fields.slice(fields.indexOf(event.target) + 1);
  const next = after.find((field) => !("skip" in field.dataset)) ?? form.querySelector("[data-last]");
  next?.focus();
  next?.select?.();
});
