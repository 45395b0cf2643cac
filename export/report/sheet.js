"use strict";
(() => {
  const data = JSON.parse(document.getElementById("stations").textContent);
  const make = (name, words) => { const item = document.createElement(name); item.textContent = words; return item; };
  const show = (query) => document.querySelectorAll(query).forEach((item) => { item.hidden = false; item.removeAttribute("hidden"); });
  const space = "http://www.w3.org/2000/svg";
  const plan = document.querySelector("svg.plan");
  const marker = document.getElementById("plan-marker");
  show(".scripted");

  const mark = document.createElementNS(space, "circle");
  mark.setAttribute("class", "marker");
  mark.setAttribute("r", "9");
  marker.append(mark);

  const tell = (slider) => {
    const pit = data.pits[slider.dataset.pit];
    const n = Number(slider.value);
    const at = pit.chainage[n];
    const says = document.getElementById(slider.id + "-says");
    const section = pit.section[n];
    const head = make("b", `Chainage ${at.toFixed(1)} m: ` + (section ? `represented by ${section}` : "no section represents this"));
    const list = document.createElement("dl");
    const silent = [];
    for (const [output, rows] of Object.entries(pit.says)) {
      const [word, sentence] = rows[n];
      const name = data.words.outputs[output];
      if (word === "not_assessed") silent.push(name);
      else list.append(make("dt", name), make("dd", pit.sentences[sentence]));
    }
    if (silent.length) list.append(make("dt", data.words.verdicts.not_assessed), make("dd", silent.join("; ")));
    says.replaceChildren(head, list);
    slider.setAttribute("aria-valuetext", `chainage ${at.toFixed(1)} m`);
    const [x, y] = pit.xy[n];
    const { x0, y1, k, left, top } = plan.dataset;
    mark.setAttribute("cx", Number(left) + (x - x0) * k);
    mark.setAttribute("cy", Number(top) + (y1 - y) * k);
    marker.removeAttribute("hidden");
    const line = document.querySelector(`.ribbon-marker[data-pit="${CSS.escape(slider.dataset.pit)}"]`);
    const ribbon = line.closest("svg").dataset;
    line.setAttribute("transform", `translate(${Number(ribbon.left) + at * ribbon.k} 0)`);
    line.removeAttribute("hidden");
  };

  document.querySelectorAll(".station input").forEach((slider) => {
    const pit = data.pits[slider.dataset.pit];
    if (!pit || !pit.chainage.length) { slider.closest(".station").hidden = true; return; }
    slider.max = pit.chainage.length - 1;
    slider.value = Math.floor(pit.chainage.length / 8);
    slider.addEventListener("input", () => tell(slider));
    tell(slider);
  });

  const whole = plan.getAttribute("viewBox").split(" ").map(Number);
  let view = [...whole];
  const draw = () => plan.setAttribute("viewBox", view.map((v) => v.toFixed(2)).join(" "));
  const zoom = (factor, cx = view[0] + view[2] / 2, cy = view[1] + view[3] / 2) => {
    const width = Math.min(Math.max(view[2] * factor, whole[2] / 40), whole[2]);
    const f = width / view[2];
    view = [cx - (cx - view[0]) * f, cy - (cy - view[1]) * f, width, view[3] * f];
    move(0, 0);
  };
  const move = (dx, dy) => {
    view[0] = Math.min(Math.max(view[0] + dx, whole[0]), whole[0] + whole[2] - view[2]);
    view[1] = Math.min(Math.max(view[1] + dy, whole[1]), whole[1] + whole[3] - view[3]);
    draw();
  };
  document.getElementById("zoom").addEventListener("click", (event) => {
    const how = event.target.dataset.zoom;
    if (how === "in") zoom(0.6);
    if (how === "out") zoom(1 / 0.6);
    if (how === "all") { view = [...whole]; draw(); }
  });
  const spot = (event) => {
    const box = plan.getBoundingClientRect();
    return [view[0] + ((event.clientX - box.left) / box.width) * view[2], view[1] + ((event.clientY - box.top) / box.height) * view[3]];
  };
  plan.addEventListener("wheel", (event) => {
    if (!event.ctrlKey) return;
    event.preventDefault();
    zoom(event.deltaY > 0 ? 1.2 : 1 / 1.2, ...spot(event));
  }, { passive: false });
  let from = null;
  plan.addEventListener("pointerdown", (event) => { if (view[2] < whole[2] && event.pointerType === "mouse") { from = spot(event); } });
  plan.addEventListener("pointermove", (event) => {
    if (!from) return;
    const [x, y] = spot(event);
    move(from[0] - x, from[1] - y);
  });
  window.addEventListener("pointerup", () => { from = null; });
})();
