"use strict";
(() => {
  const stage = document.getElementById("stage");
  if (!stage) return;
  const canvas = document.getElementById("parts-canvas");
  const lines = document.getElementById("parts-lines");
  const choice = document.getElementById("parts-choice");
  const boxes = [...document.querySelectorAll("#parts-boxes input")];
  const told = document.getElementById("parts-told");
  const pieces = JSON.parse(document.getElementById("parts-data").textContent);
  const gl = canvas.getContext("webgl", { antialias: true, alpha: true, preserveDrawingBuffer: true });
  if (!gl) {
    told.textContent = "This browser shows no 3D here, so this is a line drawing; open assembly.step or assembly.glb instead.";
    return;
  }
  const CREASE = Math.cos(Math.PI / 6), START = { yaw: -0.56, pitch: 0.56, zoom: 1, x: 0, y: 0 };
  const VIEWS = { reset: START, front: { yaw: 0, pitch: Math.PI / 2 }, side: { yaw: 0, pitch: 0 }, back: { yaw: Math.PI, pitch: -Math.PI / 2 } };
  const view = { ...START };

  const shader = (type, text) => {
    const made = gl.createShader(type);
    gl.shaderSource(made, text);
    gl.compileShader(made);
    return made;
  };
  const program = gl.createProgram();
  gl.attachShader(program, shader(gl.VERTEX_SHADER, `
    attribute vec3 at, normal; uniform mat3 turn; uniform vec3 middle; uniform vec4 scale; uniform float lift;
    varying vec3 n;
    void main() {
      vec3 p = turn * (at - middle);
      n = turn * normal;
      gl_Position = vec4(p.xy * scale.xy + scale.zw, -p.z * lift, 1.0);
    }`));
  gl.attachShader(program, shader(gl.FRAGMENT_SHADER, `
    precision mediump float; uniform vec3 colour; uniform float lit; varying vec3 n;
    void main() {
      vec3 u = normalize(n);
      float light = 0.42 + 0.45 * abs(dot(u, vec3(0.28, 0.42, 0.86))) + 0.13 * u.y;
      gl_FragColor = vec4(lit > 0.5 ? colour * light : colour, 1.0);
    }`));
  gl.linkProgram(program);
  if (!gl.getProgramParameter(program, gl.LINK_STATUS)) return;
  gl.useProgram(program);
  const place = (name) => gl.getUniformLocation(program, name);
  const AT = gl.getAttribLocation(program, "at"), NORMAL = gl.getAttribLocation(program, "normal");

  const bytes = (text) => Uint8Array.from(atob(text), (c) => c.charCodeAt(0)).buffer;
  const buffer = (array) => {
    const made = gl.createBuffer();
    gl.bindBuffer(gl.ARRAY_BUFFER, made);
    gl.bufferData(gl.ARRAY_BUFFER, array, gl.STATIC_DRAW);
    return made;
  };
  const load = (p) => {
    const steps = new Uint16Array(bytes(p.corners)), raw = bytes(p.faces);
    const faces = p.wide ? new Uint32Array(raw) : new Uint16Array(raw);
    const n = faces.length / 3, v = new Float32Array(steps.length);
    for (let i = 0; i < v.length; i++) v[i] = p.origin[i % 3] + steps[i] * p.step;
    const face = new Float32Array(3 * n), weighed = new Float32Array(3 * n), users = Array.from({ length: v.length / 3 }, () => []);
    for (let f = 0; f < n; f++) {
      const [a, b, c] = [0, 1, 2].map((k) => 3 * faces[3 * f + k]);
      const u = [0, 1, 2].map((k) => v[b + k] - v[a + k]), w = [0, 1, 2].map((k) => v[c + k] - v[a + k]);
      const x = [u[1] * w[2] - u[2] * w[1], u[2] * w[0] - u[0] * w[2], u[0] * w[1] - u[1] * w[0]];
      const size = Math.hypot(...x) || 1;
      for (let k = 0; k < 3; k++) { face[3 * f + k] = x[k] / size; weighed[3 * f + k] = x[k]; users[faces[3 * f + k]].push(f); }
    }
    const dot = (f, g) => face[3 * f] * face[3 * g] + face[3 * f + 1] * face[3 * g + 1] + face[3 * f + 2] * face[3 * g + 2];
    const at = new Float32Array(9 * n), normal = new Float32Array(9 * n), sharp = [], half = new Map();
    for (let f = 0; f < n; f++) for (let k = 0; k < 3; k++) {
      const i = faces[3 * f + k], j = faces[3 * f + (k + 1) % 3], out = 9 * f + 3 * k, sum = [0, 0, 0];
      for (const g of users[i]) if (dot(f, g) > CREASE) for (let d = 0; d < 3; d++) sum[d] += weighed[3 * g + d];
      for (let d = 0; d < 3; d++) { at[out + d] = v[3 * i + d]; normal[out + d] = sum[d] || face[3 * f + d] * 1e-6; }
      const other = half.get(j * users.length + i);
      if (other === undefined) half.set(i * users.length + j, f);
      else if (dot(f, other) < CREASE) for (const e of [i, j]) sharp.push(v[3 * e], v[3 * e + 1], v[3 * e + 2]);
    }
    const low = [0, 1, 2].map((k) => p.origin[k]), high = [...low];
    for (let i = 0; i < v.length; i++) high[i % 3] = Math.max(high[i % 3], v[i]);
    return { at: buffer(at), normal: buffer(normal), corners: 3 * n, edges: buffer(new Float32Array(sharp)), ends: sharp.length / 3, low, high };
  };
  const made = pieces.map(() => null);
  const shown = () => {
    const wanted = choice.value;
    return pieces.map((p, i) => i).filter((i) => wanted === "antenna"
      ? pieces[i].group === "antenna" && boxes.some((b) => b.checked && Number(b.value) === i) : Number(wanted) === i);
  };

  const names = pieces.map((p) => p.name);
  // what is looked at, by name, for whoever shows this page again after a rebuild
  const keep = () => {
    const off = boxes.filter((b) => !b.checked).map((b) => names[Number(b.value)]);
    stage.dataset.view = JSON.stringify({ ...view, choice: choice.value === "antenna" ? "" : names[Number(choice.value)], off });
  };

  const draw = () => {
    keep();
    const ratio = window.devicePixelRatio || 1, wide = Math.round(canvas.clientWidth * ratio), tall = Math.round(canvas.clientHeight * ratio);
    if (!wide || !tall) return;
    if (canvas.width !== wide || canvas.height !== tall) { canvas.width = wide; canvas.height = tall; }
    gl.viewport(0, 0, wide, tall);
    gl.clearColor(0, 0, 0, 0);
    gl.clear(gl.COLOR_BUFFER_BIT | gl.DEPTH_BUFFER_BIT);
    gl.enable(gl.DEPTH_TEST);
    const list = shown(), sized = choice.value === "antenna" ? pieces.map((p, i) => i).filter((i) => pieces[i].group === "antenna") : list;
    for (const i of new Set([...list, ...sized])) made[i] ??= load(pieces[i]);
    if (!sized.length) return;
    const low = [0, 1, 2].map((k) => Math.min(...sized.map((i) => made[i].low[k])));
    const high = [0, 1, 2].map((k) => Math.max(...sized.map((i) => made[i].high[k])));
    const radius = Math.hypot(...low.map((l, k) => high[k] - l)) / 2;
    const [cy, sy, cp, sp] = [Math.cos(view.yaw), Math.sin(view.yaw), Math.cos(view.pitch), Math.sin(view.pitch)];
    const zoom = 0.98 * view.zoom / radius, narrow = Math.min(wide, tall);
    gl.uniformMatrix3fv(place("turn"), false, [cy, sy * sp, -sy * cp, -sy, cy * sp, -cy * cp, 0, cp, sp]);
    gl.uniform3fv(place("middle"), low.map((l, k) => (l + high[k]) / 2));
    gl.uniform4f(place("scale"), zoom * narrow / wide, zoom * narrow / tall, view.x, view.y);
    const ink = (getComputedStyle(canvas).color.match(/[\d.]+/g) || [0, 0, 0]).slice(0, 3).map((c) => c / 255);
    gl.enable(gl.POLYGON_OFFSET_FILL);
    gl.polygonOffset(1, 1);
    for (const i of list) {
      const m = made[i];
      gl.uniform3fv(place("colour"), pieces[i].colour);
      gl.uniform1f(place("lit"), 1);
      gl.uniform1f(place("lift"), 0.5 / radius);
      for (const [spot, from] of [[AT, m.at], [NORMAL, m.normal]]) {
        gl.bindBuffer(gl.ARRAY_BUFFER, from);
        gl.enableVertexAttribArray(spot);
        gl.vertexAttribPointer(spot, 3, gl.FLOAT, false, 0, 0);
      }
      gl.drawArrays(gl.TRIANGLES, 0, m.corners);
      gl.disableVertexAttribArray(NORMAL);
      gl.vertexAttrib3f(NORMAL, 0, 0, 1);
      gl.uniform3fv(place("colour"), ink);
      gl.uniform1f(place("lit"), 0);
      gl.bindBuffer(gl.ARRAY_BUFFER, m.edges);
      gl.vertexAttribPointer(AT, 3, gl.FLOAT, false, 0, 0);
      gl.drawArrays(gl.LINES, 0, m.ends);
    }
  };
  let waiting = false;
  const soon = () => {
    if (waiting) return;
    waiting = true;
    requestAnimationFrame(() => { waiting = false; draw(); });
  };
  const turn = (dx, dy) => {
    view.yaw += dx;
    view.pitch = Math.min(Math.max(view.pitch + dy, -Math.PI / 2), Math.PI / 2);
    soon();
  };
  const nearer = (factor) => { view.zoom = Math.min(Math.max(view.zoom * factor, 0.4), 30); soon(); };

  const fingers = new Map();
  const spread = () => { const [a, b] = [...fingers.values()]; return { far: Math.hypot(a.x - b.x, a.y - b.y), x: (a.x + b.x) / 2, y: (a.y + b.y) / 2 }; };
  canvas.addEventListener("pointerdown", (e) => { canvas.setPointerCapture(e.pointerId); fingers.set(e.pointerId, { x: e.clientX, y: e.clientY }); });
  canvas.addEventListener("pointermove", (e) => {
    const was = fingers.get(e.pointerId);
    if (!was) return;
    const now = { x: e.clientX, y: e.clientY };
    if (fingers.size === 1 && !e.shiftKey) {
      fingers.set(e.pointerId, now);
      turn((now.x - was.x) * 0.01, (now.y - was.y) * 0.01);
      return;
    }
    const before = fingers.size > 1 ? spread() : { ...was, far: 1 };
    fingers.set(e.pointerId, now);
    const after = fingers.size > 1 ? spread() : { ...now, far: 1 };
    view.x += 2 * (after.x - before.x) / canvas.clientWidth;
    view.y -= 2 * (after.y - before.y) / canvas.clientHeight;
    nearer(before.far > 0 ? after.far / before.far : 1);
  });
  for (const end of ["pointerup", "pointercancel"]) canvas.addEventListener(end, (e) => fingers.delete(e.pointerId));
  canvas.addEventListener("wheel", (e) => {
    if (document.activeElement !== canvas && !e.ctrlKey) return; // the page scrolls until the picture is picked
    e.preventDefault();
    nearer(Math.exp(-e.deltaY * 0.0015));
  }, { passive: false });
  const KEYS = { ArrowLeft: () => turn(-0.15, 0), ArrowRight: () => turn(0.15, 0), ArrowUp: () => turn(0, -0.15), ArrowDown: () => turn(0, 0.15),
    "+": () => nearer(1.2), "=": () => nearer(1.2), "-": () => nearer(1 / 1.2), 0: () => look("reset") };
  canvas.addEventListener("keydown", (e) => { if (KEYS[e.key] && !e.ctrlKey && !e.metaKey && !e.altKey) { e.preventDefault(); KEYS[e.key](); } });
  const look = (name) => { Object.assign(view, { zoom: 1, x: 0, y: 0 }, VIEWS[name]); soon(); };
  for (const button of document.querySelectorAll("#parts-buttons button")) {
    const name = button.dataset.view;
    button.addEventListener("click", () => name === "nearer" ? nearer(1.25) : name === "further" ? nearer(0.8) : look(name));
  }
  const boxesRow = document.getElementById("parts-boxes");
  choice.addEventListener("change", () => { boxesRow.hidden = choice.value !== "antenna"; Object.assign(view, { zoom: 1, x: 0, y: 0 }); soon(); });
  for (const box of boxes) box.addEventListener("change", soon);
  stage.addEventListener("restore-view", (e) => {
    const was = JSON.parse(e.detail);
    for (const key of Object.keys(START)) if (Number.isFinite(was[key])) view[key] = was[key];
    for (const box of boxes) box.checked = !was.off.includes(names[Number(box.value)]);
    const part = names.indexOf(was.choice);
    choice.value = part < 0 ? "antenna" : String(part);
    boxesRow.hidden = choice.value !== "antenna";
    soon();
  });
  canvas.addEventListener("webglcontextlost", (e) => { e.preventDefault(); canvas.hidden = true; lines.removeAttribute("hidden"); });

  lines.setAttribute("hidden", "");
  canvas.hidden = false;
  document.getElementById("parts-controls").hidden = false;
  boxesRow.hidden = false;
  told.textContent = "Drag to turn, pinch to zoom, two fingers or shift to move. Picked with a click or the tab key: wheel, arrow keys, + and \u2212, 0 for the first view.";
  new ResizeObserver(soon).observe(canvas);
  matchMedia("(prefers-color-scheme: dark)").addEventListener("change", soon);
  draw();
})();
