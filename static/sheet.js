// The little that a sheet needs beyond htmx: say when a save did not get through, and send what was
// typed in the last moments when the page is left. Without script the form still works.
(() => {
  const LEFT = "armslength-left-while-typing";
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
    if (!typed || !form()) return;
    navigator.sendBeacon(form().action, new URLSearchParams(new FormData(form())));
    sessionStorage.setItem(LEFT, location.pathname);
  });
  // A reload asks for the page before the one it leaves can send its last words: look once more.
  if (sessionStorage.getItem(LEFT) === location.pathname) {
    setTimeout(() => location.reload(), 300);
  }
  sessionStorage.removeItem(LEFT);
  document.documentElement.classList.add("scripted");
})();
