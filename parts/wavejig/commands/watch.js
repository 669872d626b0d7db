"use strict";
(() => {
  const EVERY_MS = 700;
  const phase = document.getElementById("phase"), list = document.getElementById("problems"), frame = document.getElementById("pack");
  let shown = -1, told = "";
  const line = (word, text) => {
    const p = document.createElement("p");
    const b = document.createElement("b");
    b.textContent = word;
    p.append(b, text);
    return p;
  };
  // sections that open and close, told by where they stand: their words may change with a rebuild
  const folds = (page) => {
    const count = new Map();
    return [...page.querySelectorAll("details")].map((fold) => {
      const where = fold.closest("section")?.id ?? "", n = (count.get(where) ?? 0) + 1;
      count.set(where, n);
      return [`${where} ${n}`, fold];
    });
  };
  const looked = () => {
    const page = frame.contentDocument;
    return {
      at: frame.contentWindow.scrollY,
      view: page.getElementById("stage")?.dataset.view,
      open: new Map(folds(page).map(([key, fold]) => [key, fold.open])),
    };
  };
  const lookAgain = (was) => {
    const page = frame.contentDocument;
    for (const [key, fold] of folds(page)) if (was.open.has(key)) fold.open = was.open.get(key);
    if (was.view) page.getElementById("stage")?.dispatchEvent(new CustomEvent("restore-view", { detail: was.view }));
    frame.contentWindow.scrollTo(0, was.at);
  };
  const show = (state) => {
    const text = JSON.stringify(state);
    if (text === told) return;
    told = text;
    phase.textContent = state.text;
    document.body.className = state.phase;
    document.title = `${state.phase === "broken" ? "broken: " : state.phase === "building" ? "building: " : ""}${state.recipe}`;
    list.replaceChildren(...state.problems.map((p) => {
      const item = document.createElement("li");
      item.append(line(p.where + " ", ""), line("", p.message));
      if (p.fix) item.append(line("Do: ", p.fix));
      return item;
    }));
    if (state.pack !== shown) {
      const was = shown < 0 ? null : looked();
      shown = state.pack;
      if (shown < 0) return;
      frame.addEventListener("load", () => {
        if (was) lookAgain(was);
        for (const link of frame.contentDocument.querySelectorAll("a[href]:not([href^='#'])")) { link.target = "_blank"; link.rel = "noopener"; }
      }, { once: true });
      frame.hidden = false;
      frame.src = `/pack/report.html?${shown}`;
    }
  };
  const look = async () => {
    try {
      const answer = await fetch("/state.json", { cache: "no-store" });
      show(await answer.json());
    } catch {
      told = "";
      phase.textContent = "the watch has ended; below is the last pack it made";
    }
    setTimeout(look, EVERY_MS);
  };
  look();
})();
