/* What every page does by itself: says when it may be old, remembers light or dark, keeps the crew's screen
   awake, prints, and puts the cursor where the next key belongs. No page needs it to show what it shows. */
(() => {
  "use strict";
  const QUIET_LIMIT_MS = 5000; // the server ticks every 3 s
  const BEHIND_LIMIT_MS = 3000; // a revision was announced and has not been shown
  const ASK_AGAIN_MS = 2000;
  const DEAF_MS = 700;
  const ERROR_STAYS_MS = 8000;
  const THEME = "platewright-theme";
  const root = document.documentElement;

  const remembered = (() => { try { return localStorage.getItem(THEME); } catch { return null; } })();
  if (remembered === "dark" || remembered === "light") root.dataset.theme = remembered;

  function switchTheme() {
    const systemDark = matchMedia("(prefers-color-scheme: dark)").matches;
    const dark = root.dataset.theme ? root.dataset.theme === "dark" : systemDark;
    root.dataset.theme = dark ? "light" : "dark";
    try { localStorage.setItem(THEME, root.dataset.theme); } catch { /* a private window forgets */ }
  }

  const clock = (ms) => new Date(ms).toLocaleTimeString("en-GB");

  function inWords(ms) {
    const minutes = Math.floor(ms / 60000);
    if (minutes < 1) return "just now";
    if (minutes < 60) return minutes === 1 ? "1 minute ago" : `${minutes} minutes ago`;
    const hours = Math.floor(minutes / 60);
    return hours === 1 ? "more than 1 hour ago" : `more than ${hours} hours ago`;
  }

  function watch(live) {
    const band = document.getElementById("stale");
    let heard = Date.now();
    let changed = null; // when the present revision was first heard of
    let announced = null;
    let announcedAt = heard;
    let askedAt = 0;
    let connected = true;

    const shown = () => document.querySelector("[data-revision]")?.dataset.revision ?? null;
    const note = () => { heard = Date.now(); look(); };

    live.addEventListener("tick", note);
    live.addEventListener("revision", (event) => {
      const revision = event.detail?.data;
      if (revision === undefined) return; // asked for below: no word from the server
      if (String(revision) !== announced) {
        announced = String(revision);
        announcedAt = changed = Date.now();
      }
      note();
    });

    function look() {
      const now = Date.now();
      const behind = announced !== null && shown() !== null && shown() !== announced && now - announcedAt > BEHIND_LIMIT_MS;
      let text = "";
      if (now - heard > QUIET_LIMIT_MS) text = `Not connected since ${clock(heard)}. What you see may be old.`;
      else if (behind) text = `There is news since ${clock(announcedAt)} that could not be fetched. What you see is old.`;
      if (band.textContent !== text) band.textContent = text; // an unchanged alert is not read out again
      band.hidden = text === "";
      const hears = now - heard <= QUIET_LIMIT_MS;
      if (hears !== connected) {
        connected = hears;
        document.dispatchEvent(new CustomEvent("platewright:connection", { detail: { connected } }));
      }
      if (behind && now - heard <= QUIET_LIMIT_MS && now - askedAt > ASK_AGAIN_MS) {
        askedAt = now;
        live.dispatchEvent(new CustomEvent("revision")); // every region asks for its fragment again
      }
      const age = document.querySelector("[data-age]");
      if (age) {
        const words = changed === null ? "" : `connected, changed ${inWords(now - changed)}`;
        const next = text ? "not up to date" : words || "connecting";
        if (age.textContent !== next) age.textContent = next;
      }
    }

    setInterval(look, 1000);
    document.addEventListener("htmx:after:swap", look);
    document.addEventListener("visibilitychange", look);
  }

  function stayAwake() {
    if (!("wakeLock" in navigator) || !window.isSecureContext) return; // the set-up checklist says what to set instead
    const ask = () => { if (document.visibilityState === "visible") navigator.wakeLock.request("screen").catch(() => {}); };
    document.addEventListener("visibilitychange", ask);
    ask();
  }

  function halfTyped(element) {
    return element && element !== document.body && "value" in element && element.type !== "submit"
      && element.tagName !== "BUTTON" && element.value !== element.defaultValue;
  }

  function focusNext() {
    if (halfTyped(document.activeElement)) return;
    const next = document.querySelector("[data-focus]");
    if (next && next !== document.activeElement) next.focus({ preventScroll: true });
  }

  /* A tap meant for what stood here a moment ago must not answer what stands here now: when the instruction has
     just been replaced under the finger, buttons stay deaf for the time a person needs to see it. */
  function guardTaps(crew) {
    const instruction = () => { const now = crew.querySelector(".now"); return now ? `${now.dataset.state} ${now.dataset.shown}` : ""; };
    let shown = instruction();
    let replacedAt = 0;
    document.addEventListener("htmx:after:swap", () => {
      if (instruction() !== shown) { shown = instruction(); replacedAt = Date.now(); }
    });
    crew.addEventListener("click", (event) => {
      if (Date.now() - replacedAt < DEAF_MS && event.target.closest("form")) { event.preventDefault(); event.stopPropagation(); }
    }, true);
  }

  function clearOldError() {
    const box = document.getElementById("crew-error");
    if (!box || !box.textContent.trim()) return;
    const since = Number(box.dataset.since || 0);
    if (since && Date.now() - since > ERROR_STAYS_MS) { box.replaceChildren(); delete box.dataset.since; }
    else if (!since) box.dataset.since = String(Date.now());
  }

  document.addEventListener("click", (event) => {
    if (event.target.closest("[data-theme-switch]")) switchTheme();
    if (event.target.closest("[data-print]")) window.print();
  });
  document.addEventListener("htmx:after:swap", focusNext);
  document.addEventListener("DOMContentLoaded", () => {
    const live = document.getElementById("live");
    if (live && document.getElementById("stale")) watch(live);
    if (document.body.hasAttribute("data-keep-awake")) stayAwake();
    if (document.getElementById("crew")) guardTaps(document.getElementById("crew"));
    if (document.getElementById("crew-error")) setInterval(clearOldError, 1000);
  });
})();
