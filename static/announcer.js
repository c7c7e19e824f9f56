/* How a name is said: written by the announcer, kept on this device only, put back after every change of the page. */
(() => {
  "use strict";
  const key = (input) => `platewright-say ${input.dataset.say}`;

  function fill() {
    for (const input of document.querySelectorAll("[data-say]")) {
      if (input === document.activeElement && input.dataset.filled === input.dataset.say) continue;
      let said = "";
      try { said = localStorage.getItem(key(input)) || ""; } catch { /* a private window forgets */ }
      input.value = said;
      input.dataset.filled = input.dataset.say;
    }
  }

  document.addEventListener("input", (event) => {
    const input = event.target.closest("[data-say]");
    if (!input) return;
    try { localStorage.setItem(key(input), input.value); } catch { /* a private window forgets */ }
  });
  document.addEventListener("htmx:after:swap", fill);
  fill();
})();
