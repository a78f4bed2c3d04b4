// The little that a sheet needs beyond htmx: say when a save did not get through, and send what was
// typed in the last moments when the page is left. Without script the form still works.
(() => {
  let typed = false;
  const form = () => document.getElementById("sheet-form");
  const say = (hidden) => {
    const alert = document.getElementById("not-saved");
    if (alert) alert.hidden = hidden;
  };
  document.addEventListener("input", (event) => {
    if (event.target.form === form()) typed = true;
  });
  document.addEventListener("htmx:before:request", () => { typed = false; });
  document.addEventListener("htmx:after:request", () => say(true));
  document.addEventListener("htmx:error", () => { typed = true; say(false); });
  addEventListener("pagehide", () => {
    if (typed && form()) navigator.sendBeacon(form().action, new URLSearchParams(new FormData(form())));
  });
  document.documentElement.classList.add("scripted");
})();
