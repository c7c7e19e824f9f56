/* Sizes by reading distance. A screen that has been told its diagonal and its distance knows its millimetres: digits
   shall be 12 mm high for each metre. The crew's screen leaves out the least important until they are; what still
   does not fit is said in words. Nothing here changes what is shown, only how large and how much around it. */
(() => {
  "use strict";
  const CAP = 0.668; // height of a figure in the vendored typeface, in ems
  const MM_PER_M = 12, RACK_MM = 30, INCH_MM = 25.4, TOLERANCE = 0.98;
  const LEVELS = ["0", "1", "2"];
  const root = document.documentElement;
  const facts = document.getElementById("screen-facts") || document.body;
  const distance = Number(facts.dataset.distance), diagonal = Number(facts.dataset.diagonal);
  if (!(distance > 0) || !(diagonal > 0)) return;

  const perMm = () => Math.hypot(screen.width, screen.height) / (diagonal * INCH_MM);
  const need = () => MM_PER_M * distance * perMm();

  const sheet = new CSSStyleSheet(); // no inline style: the page's content policy stays strict
  document.adoptedStyleSheets = [...document.adoptedStyleSheets, sheet];
  function tellSizes() {
    const ruler = [100, 50, 20].find((mm) => mm * perMm() < innerWidth * 0.86) || 10;
    sheet.replaceSync(`:root { --mm: ${perMm()}px; --digit: ${need()}px; --ruler: ${ruler}; }`);
    root.dataset.measured = "";
    for (const place of document.querySelectorAll("[data-ruler]")) place.textContent = `${ruler} mm`;
  }

  const visible = (element) => element.getClientRects().length > 0;
  function svgDigit(text) {
    const matrix = text.getScreenCTM();
    return matrix ? Number(text.getAttribute("font-size")) * CAP * Math.abs(matrix.a) : Infinity;
  }
  const htmlDigit = (element) => parseFloat(getComputedStyle(element).fontSize) * CAP;

  /* Of one line and two lines the one with the larger digits. */
  function chooseLines(now) {
    for (const place of now.querySelectorAll(".move .place")) {
      delete place.dataset.lines;
      const [wide, narrow] = place.querySelectorAll(".plate-row");
      if (!wide || !narrow) continue;
      const found = ["one", "two"].map((lines) => {
        place.dataset.lines = lines;
        return svgDigit((lines === "one" ? wide : narrow).querySelector(".token"));
      });
      place.dataset.lines = found[1] > found[0] ? "two" : "one";
    }
  }

  const least = (digits) => Math.min(...digits);
  const svgDigits = (now, selector) => [...now.querySelectorAll(selector)].filter(visible).map(svgDigit);

  /* The least digit of what comes off and goes on, and of the weight. */
  function measure(now) {
    const hands = least(svgDigits(now, ".plate-row .token"));
    const weight = least([...svgDigits(now, ".weight .big-text text"), ...[...now.querySelectorAll(".swap strong")].filter(visible).map(htmlDigit)]);
    return { hands, weight, least: Math.min(hands, weight) };
  }

  function fit(now) {
    let best = null;
    for (const level of LEVELS) {
      root.dataset.spare = level;
      chooseLines(now);
      const sizes = measure(now);
      const score = Math.min(sizes.hands, need()) + Math.min(sizes.weight, need());
      if (best === null || score > best.score * 1.02) best = { ...sizes, score, level };
      if (sizes.least >= need() * TOLERANCE) break;
    }
    root.dataset.spare = best.level;
    chooseLines(now);
    return best.least;
  }

  const inMm = (pixels) => Math.floor(pixels / perMm() * 10 + 0.5) / 10;

  function say(now, size) {
    const place = document.getElementById("sizes");
    if (!place) return;
    const mm = inMm(size), wanted = MM_PER_M * distance;
    let words = `Digits ${Math.round(mm)} mm, for ${distance} m.`;
    const short = size < need() * TOLERANCE;
    if (short) words = `Too small for ${distance} m: digits ${Math.floor(mm)} mm, not ${wanted}. Read from ${Math.floor(mm / MM_PER_M * 10) / 10} m.`;
    const rack = now.querySelector(".rack .big-text text");
    if (rack && visible(rack) && inMm(svgDigit(rack)) < RACK_MM * TOLERANCE) words += ` Rack ${Math.floor(inMm(svgDigit(rack)))} mm, not ${RACK_MM}.`;
    place.dataset.short = String(short);
    if (place.textContent !== words) place.textContent = words;
  }

  function look() {
    tellSizes();
    const now = document.querySelector("#crew .now");
    if (now) { const size = fit(now); if (Number.isFinite(size)) say(now, size); }
    const verdict = document.getElementById("screen-verdict");
    if (verdict) judge(verdict);
  }

  /* Before the meet: how far a change of three plates can be read: three lines of digits are the
     height, and three plates of two digits the width (as the crew's screen lays them out at its sparest). */
  function judge(verdict) {
    const wide = Math.max(screen.width, screen.height), high = Math.min(screen.width, screen.height);
    const most = Math.min(high / 3.7, wide / 8.6) / perMm() / MM_PER_M;
    const words = `${Math.floor(most * 10) / 10} m`;
    verdict.textContent = most < distance * TOLERANCE
      ? `This screen is too small for ${distance} m. A change of three plates off and three on can be read from ${words}. Bring it nearer, or use a larger one.`
      : `Large enough: a change of three plates off and three on can be read from ${words}.`;
  }

  addEventListener("resize", look);
  document.addEventListener("htmx:after:swap", look);
  document.addEventListener("platewright:shown", look);
  document.fonts?.ready.then(look);
  if (document.readyState === "loading") document.addEventListener("DOMContentLoaded", look); else look();
})();
