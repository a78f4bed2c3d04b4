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
  // An outcome just added wants its name first.
  let added = false;
  document.addEventListener("click", (event) => { added = event.target.id === "add-outcome"; });
  document.addEventListener("htmx:after:swap", () => {
    if (added) document.querySelector("#sheet [autofocus]")?.focus();
    added = false;
  });
  addEventListener("pagehide", () => {
    if (!typed || !form()) return;
    navigator.sendBeacon(form().action, new URLSearchParams(new FormData(form())));
    sessionStorage.setItem(LEFT, location.pathname);
  });
  // A reload asks for the page before the one it leaves can send its last words: look once more.
  if (sessionStorage.getItem(LEFT) === location.pathname) {
    const again = setTimeout(() => location.reload(), 300);
    for (const kind of ["keydown", "pointerdown", "input"]) addEventListener(kind, () => clearTimeout(again), { once: true });
  }
  sessionStorage.removeItem(LEFT);
  document.documentElement.classList.add("scripted");
})();
