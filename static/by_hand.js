/* Without a network the crew goes on by hand: the next changes have been fetched while there was one. Nothing is sent
   from here; when the connection is back, what the table says is shown again and the page says so. */
(() => {
  "use strict";
  const AGAIN_STAYS_MS = 12000;
  const crew = document.getElementById("crew");
  const bar = document.getElementById("by-hand");
  const again = document.getElementById("again");
  const live = document.getElementById("live");
  if (!crew || !bar || !live) return;
  const place = bar.querySelector("[data-place]");
  const next = bar.querySelector("[data-next]");
  const back = bar.querySelector("[data-back]");
  let ahead = []; // screens that follow, in order
  let told = null; // what the table last said, kept while others are shown
  let at = 0; // 0 = as last told
  let offline = false;

  async function fetchAhead() {
    if (offline) return;
    try {
      const answer = await fetch(bar.dataset.ahead, { headers: { Accept: "text/html" } });
      if (!answer.ok) return;
      const read = new DOMParser().parseFromString(await answer.text(), "text/html");
      ahead = [...read.querySelectorAll("section.now")];
    } catch { /* what was fetched before stays */ }
  }

  function show() {
    if (at === 0) crew.replaceChildren(...told);
    else crew.replaceChildren(document.importNode(ahead[at - 1], true));
    const words = at === 0 ? place.dataset.now : place.dataset.aheadWords.replace("{number}", at).replace("{all}", ahead.length);
    place.textContent = ahead.length ? words : place.dataset.none;
    back.disabled = at === 0;
    next.disabled = at >= ahead.length;
    document.dispatchEvent(new CustomEvent("platewright:shown"));
  }

  function leave() {
    offline = true;
    told = [...crew.childNodes];
    at = 0;
    bar.hidden = false;
    again.hidden = true;
    show();
  }

  function comeBack() {
    offline = false;
    crew.replaceChildren(...told); // the newest state is asked for by the revision that the server tells on connecting
    bar.hidden = true;
    say(again.dataset.again);
    live.dispatchEvent(new CustomEvent("revision"));
    document.dispatchEvent(new CustomEvent("platewright:shown"));
    fetchAhead();
  }

  function say(words) {
    again.textContent = words;
    again.hidden = false;
    setTimeout(() => { if (again.textContent === words) again.hidden = true; }, AGAIN_STAYS_MS);
  }

  document.addEventListener("platewright:connection", (event) => { if (event.detail.connected) comeBack(); else leave(); });
  next.addEventListener("click", () => { if (at < ahead.length) { at += 1; show(); } });
  back.addEventListener("click", () => { if (at > 0) { at -= 1; show(); } });
  crew.addEventListener("click", (event) => {
    if (!offline || !event.target.closest("form")) return;
    event.preventDefault();
    event.stopPropagation();
    say(again.dataset.unsent);
  }, true);
  /* A plate that goes on was tapped: is it not there? */
  crew.addEventListener("click", (event) => {
    const row = event.target.closest?.(".move.on .plate-row");
    const lacking = crew.querySelector("a.lacking");
    if (offline || !row || !lacking || !event.target.matches(".token, .rim")) return;
    const token = event.target.matches(".token") ? event.target : event.target.nextElementSibling;
    location.assign(`${lacking.getAttribute("href")}?face=${encodeURIComponent(token.textContent.trim())}`);
  });

  live.addEventListener("revision", fetchAhead);
  fetchAhead();
})();
