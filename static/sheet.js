// The little that a sheet needs beyond htmx: say when a save did not get through, and send what was
// typed in the last moments when the page is left. Without script the form still works.
(() => {
  const LEFT = "armslength-left-while-typing";
  let typed = 0, sent = 0, saved = 0;  // changes made, those in the last save sent, those a save has answered for
  const form = () => document.getElementById("sheet-form");
  const say = (hidden) => {
    const alert = document.getElementById("not-saved");
    if (alert) alert.hidden = hidden;
  };
  document.addEventListener("input", (event) => {
    if (event.target.form === form()) typed += 1;
  });
  document.addEventListener("htmx:before:request", () => { sent = typed; });
  document.addEventListener("htmx:after:request", () => { saved = sent; say(true); });
  document.addEventListener("htmx:error", () => { saved = Math.min(saved, typed - 1); say(false); });
  // An outcome just added wants its name first.
  let added = false;
  document.addEventListener("click", (event) => { added = event.target.id === "add-outcome"; });
  document.addEventListener("htmx:after:swap", () => {
    if (added) document.querySelector("#sheet [autofocus]")?.focus();
    added = false;
  });
  // A box that the answer filled shows it, unless it was typed into since; the passage stays open while it is written.
  const since = new Set();
  document.addEventListener("input", (event) => {
    since.add(event.target.name);
    if (event.target.id !== "passage") return;
    changed = true;
    pasted = event.inputType === "insertFromPaste";
  });
  document.addEventListener("htmx:before:request", () => since.clear());
  let changed = false, pasted = false;
  const passage = () => document.getElementById("passage");
  document.addEventListener("htmx:after:swap", () => {
    for (const box of document.querySelectorAll("#sheet-form [data-given]")) {
      const given = box.dataset.given;
      if (box !== document.activeElement && !since.has(box.name) && box.value !== given) box.value = given;
    }
    if (!changed || !passage()) return;
    changed = passage() === document.activeElement && !pasted;
    passage().closest("details").open = changed || !document.getElementById("passage-read");
  });
  // A PDF dropped on the sheet is opened like one chosen.
  document.addEventListener("dragover", (event) => { if (document.getElementById("open-paper")) event.preventDefault(); });
  document.addEventListener("drop", (event) => {
    const form = document.getElementById("open-paper"), files = event.dataTransfer?.files;
    if (!form || !files?.length) return;
    event.preventDefault();
    form.elements.paper.files = files;
    form.submit();
  });
  addEventListener("pagehide", () => {
    if (typed === saved || !form()) return;
    const body = new URLSearchParams(new FormData(form()));
    navigator.sendBeacon(form().action, body);
    sessionStorage.setItem(LEFT, JSON.stringify({ page: location.pathname, when: Date.now(), body: body.toString() }));
  });
  // A reload may be answered before the last words it left behind arrive: see that they do, and look once more.
  const left = JSON.parse(sessionStorage.getItem(LEFT) ?? "null");
  sessionStorage.removeItem(LEFT);
  if (left?.page === location.pathname && Date.now() - left.when < 10_000) {
    const began = new AbortController();
    for (const kind of ["keydown", "pointerdown", "input"]) addEventListener(kind, () => began.abort(), { once: true });
    fetch(left.page, { method: "POST", body: new URLSearchParams(left.body) })
      .then(() => began.signal.aborted || location.reload())
      .catch(() => say(false));
  }
  document.documentElement.classList.add("scripted");
})();
