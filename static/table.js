/* The Table by keyboard: one key for a result, digits and Enter for a weight. Everything works without it too. */
(() => {
  "use strict";
  const seen = new Map(); // attempt → version its weight box had when typing began

  const isWeight = (element) => element instanceof HTMLInputElement && element.name === "weight";
  const takesText = (element) => element instanceof HTMLElement && element.matches("input:not([type=hidden]), textarea, select");

  function stepBy(box, direction) {
    const step = Number(box.dataset.step);
    const from = Number((box.value || box.placeholder).replace(",", "."));
    if (!Number.isFinite(from) || !(step > 0)) return;
    const next = direction > 0 ? Math.floor(from / step + 1 + 1e-9) * step : Math.ceil(from / step - 1 - 1e-9) * step;
    box.value = String(Math.max(0, Number(next.toFixed(4))));
    box.dispatchEvent(new Event("input", { bubbles: true }));
  }

  function onKey(event) {
    if (event.ctrlKey || event.altKey || event.metaKey || event.isComposing) return;
    const box = event.target;
    if (isWeight(box) && (event.key === "ArrowUp" || event.key === "ArrowDown")) {
      event.preventDefault();
      stepBy(box, event.key === "ArrowUp" ? 1 : -1);
      return;
    }
    if (isWeight(box) && event.key === "Escape") { forget(box); return; }
    if (box.id === "find-lot") { if (event.key === "Enter") { event.preventDefault(); find(box); } return; }
    if (takesText(box) && !isWeight(box)) return;
    const key = event.key.toLowerCase();
    if (isWeight(box) && key === "r" && box.value !== "") return; // 142.5r: a record attempt
    const target = document.querySelector(`[data-key="${CSS.escape(key)}"]`);
    const place = document.querySelector(`[data-key-focus="${CSS.escape(key)}"]`);
    // A repeated key is a finger that lay too long, not a second decision.
    if (target && !event.repeat) { event.preventDefault(); target.click(); }
    else if (place) { event.preventDefault(); place.focus(); place.select(); }
  }

  function find(box) {
    const lot = box.value.trim();
    const boxes = [...document.querySelectorAll(".weight-box")].filter((one) => one.dataset.lot === lot);
    const wanted = boxes.find((one) => one.value === "") ?? boxes[0];
    box.value = "";
    if (wanted) { wanted.focus(); wanted.select(); } else box.placeholder = "not here";
  }

  function forget(box) {
    box.value = box.defaultValue;
    seen.delete(box.form.elements.attempt.value);
  }

  document.addEventListener("keydown", onKey);

  // How long somebody still has to hand in. For the table only; the crew's screen never counts down.
  function countDown() {
    for (const place of document.querySelectorAll("[data-until]")) {
      const left = Math.ceil((Date.parse(place.dataset.until) - Date.now()) / 1000);
      const words = left > 0 ? `${left} s left` : "time is over";
      if (place.textContent !== words) place.textContent = words;
      place.toggleAttribute("data-over", left <= 0);
    }
  }
  setInterval(countDown, 500);
  document.addEventListener("htmx:after:swap", countDown);
  document.addEventListener("DOMContentLoaded", countDown);

  // The version that counts is the one on the screen when typing began: an update that arrives meanwhile must
  // not make a colleague's entry look as if it had been seen.
  document.addEventListener("input", (event) => {
    if (!isWeight(event.target)) return;
    const { attempt, version } = event.target.form.elements;
    if (!seen.has(attempt.value)) seen.set(attempt.value, version.value);
  });
  document.addEventListener("submit", (event) => {
    const { attempt, version, weight } = event.target.elements;
    if (weight && attempt && seen.has(attempt.value)) version.value = seen.get(attempt.value);
  }, true);

  // What was typed is let go of only when the server has taken it.
  document.addEventListener("htmx:after:request", (event) => {
    const { ctx } = event.detail;
    const { weight, attempt } = ctx.sourceElement.elements ?? {};
    if (weight && attempt && ctx.response.status < 400) seen.delete(attempt.value);
  });
  document.addEventListener("htmx:error", (event) => {
    const refused = document.getElementById("refused");
    if (!(event.target instanceof HTMLFormElement) || !refused) return;
    const message = document.createElement("div");
    message.className = "message error";
    message.setAttribute("role", "alert");
    message.textContent = "Not entered: the server does not answer. Enter it again when this page is connected.";
    refused.replaceChildren(message);
  });

  document.addEventListener("htmx:after:swap", () => {
    for (const box of document.querySelectorAll(".weight-box")) {
      const { attempt, version } = box.form.elements;
      // A refused weight stays in its box; its line says why, so what is there now has been seen.
      if (box.hasAttribute("aria-invalid")) seen.set(attempt.value, version.value);
      // Boxes that nobody is typing in show what the server says.
      else if (!seen.has(attempt.value) && box.value !== box.defaultValue) box.value = box.defaultValue;
    }
  });

  // What is half typed stays, with what was said about it: an update of the page knows of neither.
  const ahead = (id) => document.getElementById(id.replace("weight-", "ahead-"));
  const ofTable = (event) => event.detail.ctx?.target?.id === "table";
  let kept = [];
  document.addEventListener("htmx:before:swap", (event) => {
    if (!ofTable(event)) return;
    const boxes = [...document.querySelectorAll(".weight-box")].filter((box) => seen.has(box.form.elements.attempt.value));
    kept = boxes.map((box) => ({
      id: box.id, value: box.value, wrong: box.hasAttribute("aria-invalid"), said: [...ahead(box.id).childNodes],
      reason: box.form.querySelector(".reason"), cursor: document.activeElement,
    }));
  });
  document.addEventListener("htmx:after:swap", (event) => {
    if (!ofTable(event)) return;
    for (const { id, value, wrong, said, reason, cursor } of kept) {
      const box = document.getElementById(id);
      if (!box || box.hasAttribute("aria-invalid") || !seen.has(box.form.elements.attempt.value)) continue;
      box.value = value;
      if (wrong) box.setAttribute("aria-invalid", "true");
      if (ahead(id).children.length === 0) ahead(id).replaceChildren(...said);
      if (!reason || reason.isConnected) continue;
      ahead(id).before(reason);
      if (cursor === reason) reason.focus();
    }
  });

  // The page also fetches itself when the server announces what this very screen has just entered; that answer
  // says nothing and points nowhere, and must not take away what the entry's own answer said.
  const SAID_STAYS_MS = 5000;
  let said = { text: "", until: 0 };
  let cursor = "";
  document.addEventListener("focusin", (event) => { if (isWeight(event.target)) cursor = event.target.id; });
  document.addEventListener("htmx:after:swap", () => {
    const place = document.getElementById("said");
    if (place?.textContent.trim()) said = { text: place.textContent, until: Date.now() + SAID_STAYS_MS };
    else if (place && Date.now() < said.until) place.textContent = said.text;
    if (document.activeElement !== document.body) return;
    (document.querySelector("[data-focus]") ?? document.getElementById(cursor))?.focus({ preventScroll: true });
  });
})();
