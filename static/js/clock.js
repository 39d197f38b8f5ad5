// Keeps the local time in the header going. Without script it says when the page was made.

const clock = document.querySelector("[data-clock]");

if (clock) {
  const ahead = Number(clock.dataset.clock) - Date.now();
  const local = new Intl.DateTimeFormat("en-GB", {
    hour: "2-digit",
    minute: "2-digit",
    timeZone: clock.dataset.zone,
  });

  const show = () => {
    const now = new Date(Date.now() + ahead);
    const text = local.format(now);
    if (clock.textContent !== text) {
      clock.textContent = text;
      clock.dateTime = now.toISOString();
    }
  };

  setInterval(show, 5000);
  document.addEventListener("visibilitychange", show);
}
