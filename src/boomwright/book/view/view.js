// The 3D view of the build book. Runs inside one function together with THREE (three.min.js); sees only its own section.
// Points are in millimetres; the viewer looks along parallel lines, from `azimuth` and `elevation`, at `target`.

const root = document.currentScript.closest(".bw-view");
const find = (selector) => root.querySelector(selector);
const findAll = (selector) => Array.from(root.querySelectorAll(selector));
const scene = JSON.parse(find("script[type='application/json']").textContent);
const canvas = find("canvas");
const overlay = find("svg");
const partByKey = new Map();
const axisByKey = new Map(scene.axes.map((axis) => [axis.key, axis]));
const calm = window.matchMedia("(prefers-reduced-motion: reduce)");

const HOME = { azimuth: scene.view[0], elevation: scene.view[1] };
const TURN_DEG = 10, ZOOM = 1.2, MOVE_SHARE = 0.08, CLICK_PX = 5, REACH_PX = 12, TAG_PX = 26, GLIDE_MS = 400, MARGIN = 0.86;

let renderer = null, camera = null, world = null, lamp = null;
let pose = scene.poses[0];
let look = { ...HOME, target: [0, 0, 0], span: 100 };  // span: height of what is seen
let untouched = true;  // the user has neither zoomed nor moved: the view may fit itself
let frameAsked = false, glide = null, picked = [];

// ---- numbers ------------------------------------------------------------------------------------------------------

function bytes(text) {
  return Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0)).buffer;
}

function dot(a, b) { return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]; }
function less(a, b) { return [a[0] - b[0], a[1] - b[1], a[2] - b[2]]; }
function plus(a, b, share = 1) { return [a[0] + share * b[0], a[1] + share * b[1], a[2] + share * b[2]]; }
function cross(a, b) { return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]; }
function unit(a) { return a.map((value) => value / Math.hypot(...a)); }
function stand(point, place) { return [0, 4, 8].map((row) => dot(place.slice(row, row + 3), point) + place[row + 3]); }
function figure(value) { return String(Number(Math.abs(value).toFixed(3))); }

// Right, up and toward the viewer.
function directions() {
  const a = look.azimuth * Math.PI / 180, e = look.elevation * Math.PI / 180;
  const toward = [Math.sin(a) * Math.cos(e), -Math.cos(a) * Math.cos(e), Math.sin(e)];
  const right = [Math.cos(a), Math.sin(a), 0];
  return [right, cross(toward, right), toward];
}

// ---- measuring: from the plan's axes, never from the drawn surface ----------------------------------------------------

function distanceText(one, other) {
  const along = [one, other].map((axis) => unit(less(axis.end, axis.start)));
  const between = less(other.start, one.start);
  const normal = cross(along[0], along[1]);
  if (Math.hypot(...normal) < 1e-9) {
    const apart = plus(between, along[0], -dot(between, along[0]));
    const height = Math.abs(apart[2]) > 5e-4 ? `, ${figure(apart[2])} mm in height` : "";
    return `${figure(apart[0])} mm along the boom${height}; ${figure(Math.hypot(...apart))} mm from axis to axis.`;
  }
  const angle = Math.acos(Math.min(1, Math.abs(dot(along[0], along[1])))) * 180 / Math.PI;
  const how = angle > 89.999 ? "at right angles" : `at ${figure(angle)} degrees`;
  return `The axes cross ${how}, ${figure(dot(between, unit(normal)))} mm apart.`;
}

function measure() {
  const [one, other] = picked.map((key) => axisByKey.get(key));
  let text = "Choose two axes here, or click two rods in the picture.";
  if (one && other) text = one === other ? "Choose two different axes." : distanceText(one, other);
  else if (one) text = `${one.label}: now the second axis.`;
  find(".bw-view-answer").textContent = text;
  ask();
}

function choose(keys) {
  picked = keys;
  findAll("select").forEach((select, i) => { select.value = keys[i] || ""; });
  measure();
}

// ---- building the world ---------------------------------------------------------------------------------------------

function build(context) {
  renderer = new THREE.WebGLRenderer({ canvas, context, antialias: true, alpha: true });
  delete window.__THREE__;
  world = new THREE.Scene();
  camera = new THREE.OrthographicCamera();
  lamp = new THREE.DirectionalLight(0xffffff, 1.9);
  world.add(new THREE.HemisphereLight(0xffffff, 0xd8dde2, 1.7), lamp, lamp.target);
  for (const part of scene.parts) {
    const grid = new Int16Array(bytes(part.vertices));
    const points = Float32Array.from(grid, (step, i) => step * part.scale[i % 3] + part.offset[i % 3]);
    const numbers = part.wide ? Uint32Array : Uint16Array;
    const corners = new THREE.BufferAttribute(points, 3);
    const [faces, edges] = [part.triangles, part.edges].map((text) => {
      const geometry = new THREE.BufferGeometry();
      geometry.setAttribute("position", corners);
      return geometry.setIndex(new THREE.BufferAttribute(new numbers(bytes(text)), 1));
    });
    const colour = new THREE.Color().setRGB(...part.colour, "srgb");
    const skin = new THREE.MeshLambertMaterial({
      color: colour, flatShading: true, polygonOffset: true, polygonOffsetFactor: 1, polygonOffsetUnits: 1,
    });
    const ink = new THREE.LineBasicMaterial({ color: new THREE.Color().setRGB(...part.colour.map((c) => c * 0.3), "srgb") });
    const group = new THREE.Group();
    group.add(new THREE.Mesh(faces, skin), new THREE.LineSegments(edges, ink));
    world.add(group);
    const low = part.offset.map((middle, i) => middle - 32767 * part.scale[i]);
    const high = part.offset.map((middle, i) => middle + 32767 * part.scale[i]);
    partByKey.set(part.key, { group, low, high, switch: find(`input[data-part='${CSS.escape(part.key)}']`) });
  }
}

// ---- poses, switches ------------------------------------------------------------------------------------------------

function parted(place) {
  const matrix = new THREE.Matrix4().set(...place, 0, 0, 0, 1);
  const [position, turn, size] = [new THREE.Vector3(), new THREE.Quaternion(), new THREE.Vector3()];
  matrix.decompose(position, turn, size);
  return { position, turn };
}

function take(next, at_once) {
  pose = next;
  findAll("button[data-pose]").forEach((button) => {
    button.setAttribute("aria-pressed", String(button.dataset.pose === pose.key));
  });
  root.dataset.pose = pose.key;
  const moves = [];
  for (const [key, part] of partByKey) {
    const before = part.group.visible;
    part.switch.checked = part.group.visible = pose.shows.includes(key);
    const { position, turn } = parted(pose.places[key]);
    const start = before ? { position: part.group.position.clone(), turn: part.group.quaternion.clone() } : { position, turn };
    moves.push({ part, start, end: { position, turn } });
  }
  untouched = true;
  const from = { target: look.target, span: look.span };
  glide = { moves, from, to: fitted(), since: at_once || calm.matches ? -Infinity : performance.now() };
  ask();
}

function step(now) {
  const share = Math.min(1, (now - glide.since) / GLIDE_MS);
  const eased = share * share * (3 - 2 * share);
  for (const { part, start, end } of glide.moves) {
    part.group.position.lerpVectors(start.position, end.position, eased);
    part.group.quaternion.slerpQuaternions(start.turn, end.turn, eased);
  }
  look.target = plus(glide.from.target, less(glide.to.target, glide.from.target), eased);
  look.span = glide.from.span + (glide.to.span - glide.from.span) * eased;
  if (share === 1) glide = null;
}

// The target and span that show every part that is switched on.
function fitted() {
  const axes = directions(), low = [Infinity, Infinity, Infinity], high = [-Infinity, -Infinity, -Infinity];
  for (const [key, part] of partByKey) {
    if (!part.group.visible) continue;
    for (let corner = 0; corner < 8; corner += 1) {
      const own = [0, 1, 2].map((i) => ((corner >> i) & 1 ? part.high : part.low)[i]);
      const point = stand(own, pose.places[key]);
      axes.forEach((axis, i) => {
        low[i] = Math.min(low[i], dot(axis, point));
        high[i] = Math.max(high[i], dot(axis, point));
      });
    }
  }
  if (low[0] > high[0]) return { target: look.target, span: look.span };
  const target = axes.reduce((sum, axis, i) => plus(sum, axis, (low[i] + high[i]) / 2), [0, 0, 0]);
  const aspect = canvas.clientWidth / Math.max(1, canvas.clientHeight);
  return { target, span: Math.max(high[1] - low[1], (high[0] - low[0]) / aspect, 1) / MARGIN };
}

function fit() {
  if (glide === null) Object.assign(look, fitted());
  ask();
}

// ---- drawing --------------------------------------------------------------------------------------------------------

function ask() {
  if (frameAsked || renderer === null) return;
  frameAsked = true;
  requestAnimationFrame((now) => { frameAsked = false; draw(now); });
}

function draw(now) {
  if (glide !== null) step(now);
  const [right, up, toward] = directions();
  const width = canvas.clientWidth, height = canvas.clientHeight, half = look.span / 2;
  const reach = 20 * Math.max(look.span, ...scene.size);
  Object.assign(camera, { top: half, bottom: -half, right: half * width / height, left: -half * width / height });
  Object.assign(camera, { near: 0, far: 2 * reach });
  camera.up.set(...up);
  camera.position.set(...plus(look.target, toward, reach));
  camera.lookAt(...look.target);
  camera.updateProjectionMatrix();
  lamp.position.set(...plus(plus(plus(look.target, right, -0.35 * reach), up, 0.55 * reach), toward, 0.76 * reach));
  lamp.target.position.set(...look.target);
  renderer.render(world, camera);
  annotate();
  if (glide !== null) ask();
}

// Where a point is seen [CSS px].
function seen(point) {
  const [right, up] = directions(), off = less(point, look.target), scale = canvas.clientHeight / look.span;
  return [canvas.clientWidth / 2 + dot(off, right) * scale, canvas.clientHeight / 2 - dot(off, up) * scale];
}

function seenAxis(axis) {
  return [axis.start, axis.end].map((point) => seen(stand(point, pose.places[axis.part])));
}

function pen(kind, name, numbers, text) {
  const shape = document.createElementNS("http://www.w3.org/2000/svg", kind);
  shape.setAttribute("class", name);
  for (const [key, value] of Object.entries(numbers)) shape.setAttribute(key, value.toFixed(1));
  if (text !== undefined) shape.textContent = text;
  overlay.append(shape);
}

// Tags at the rods' ends, the chosen axes as centre lines, the distance between them as a dimension.
function annotate() {
  overlay.replaceChildren();
  if (glide !== null) return;
  const taken = [];
  for (const axis of scene.axes) {
    if (!partByKey.get(axis.part).group.visible) continue;
    const ends = seenAxis(axis).sort((a, b) => b[1] - a[1]);
    const length = Math.hypot(ends[0][0] - ends[1][0], ends[0][1] - ends[1][1]);
    const way = length < 1 ? [0, 1] : [(ends[0][0] - ends[1][0]) / length, (ends[0][1] - ends[1][1]) / length];
    const chosen = picked.includes(axis.key);
    if (chosen) {
      const [a, b] = [ends[0].map((v, i) => v + 8 * way[i]), ends[1].map((v, i) => v - 8 * way[i])];
      pen("line", "bw-view-axis", { x1: a[0], y1: a[1], x2: b[0], y2: b[1] });
    }
    if (axis.key !== axis.part || axis.key === "boom") continue;
    const [x, y] = [ends[0][0] + 17 * way[0], ends[0][1] + 17 * way[1]];
    if (!chosen && taken.some((other) => Math.abs(other[0] - x) < 24 && Math.abs(other[1] - y) < 15)) continue;
    taken.push([x, y]);
    pen("text", chosen ? "bw-view-tag bw-view-chosen" : "bw-view-tag", { x, y: y + 5 }, axis.key);
  }
  dimension();
}

function dimension() {
  const [one, other] = picked.map((key) => axisByKey.get(key));
  if (!one || !other || one === other || !pose.true) return;
  if (![one, other].every((axis) => partByKey.get(axis.part).group.visible)) return;
  const way = unit(less(one.end, one.start)), between = less(other.start, one.start);
  if (Math.hypot(...cross(way, unit(less(other.end, other.start)))) > 1e-9) return;
  // Square to both axes, at the nearer end of the shorter one.
  const at = Math.max(dot(less(one.start, one.start), way), dot(between, way));
  const foot = plus(one.start, way, at), apart = plus(between, way, -dot(between, way));
  const [a, b] = [foot, plus(foot, apart)].map((point) => seen(stand(point, pose.places[one.part])));
  pen("line", "bw-view-reach", { x1: a[0], y1: a[1], x2: b[0], y2: b[1] });
  for (const [x, y] of [a, b]) pen("circle", "bw-view-foot", { cx: x, cy: y, r: 3 });
  const text = `${figure(Math.hypot(...apart))} mm`;
  pen("text", "bw-view-tag bw-view-chosen", { x: (a[0] + b[0]) / 2, y: (a[1] + b[1]) / 2 - 7 }, text);
}

// ---- hands: pointer, touch, keys --------------------------------------------------------------------------------------

function turn(azimuth, elevation) {
  look.azimuth += azimuth;
  look.elevation = Math.max(-89, Math.min(89, look.elevation + elevation));
  ask();
}

function move(dx, dy) {
  const [right, up] = directions(), scale = look.span / canvas.clientHeight;
  look.target = plus(plus(look.target, right, -dx * scale), up, dy * scale);
  untouched = false;
  ask();
}

function zoom(factor) {
  const span = look.span / factor;
  look.span = Math.max(scene.size[0] / 200, Math.min(scene.size[0] * 20, span));
  untouched = false;
  ask();
}

function reset() {
  glide = null;
  Object.assign(look, HOME);
  untouched = true;
  take(pose, true);
}

function nearest(x, y) {
  let best = null, least = Infinity;
  for (const axis of scene.axes) {
    if (!partByKey.get(axis.part).group.visible) continue;
    const [[ax, ay], [bx, by]] = seenAxis(axis);
    const length = Math.max(1e-3, Math.hypot(bx - ax, by - ay));
    // A rod's tag beyond its end counts as the rod.
    const beyond = axis.key === "boom" ? 0 : TAG_PX / length;
    const along = ((x - ax) * (bx - ax) + (y - ay) * (by - ay)) / length ** 2;
    const share = Math.max(-beyond, Math.min(1 + beyond, along));
    const off = Math.hypot(x - ax - share * (bx - ax), y - ay - share * (by - ay));
    const thick = axis.radius * canvas.clientHeight / look.span;
    // On a thick boom a rod that crosses it is the nearer one.
    const far = axis.key === "boom" ? off + 0.5 * REACH_PX : off;
    if (off <= Math.max(REACH_PX, thick) && far < least) [best, least] = [axis, far];
  }
  return best;
}

function listenToPointers() {
  const held = new Map();
  let travelled = 0;
  canvas.addEventListener("pointerdown", (event) => {
    canvas.setPointerCapture(event.pointerId);
    held.set(event.pointerId, [event.offsetX, event.offsetY]);
    if (held.size === 1) travelled = 0;
  });
  canvas.addEventListener("pointermove", (event) => {
    const last = held.get(event.pointerId), here = [event.offsetX, event.offsetY];
    if (!last) {
      canvas.classList.toggle("bw-view-over", nearest(...here) !== null);
      return;
    }
    const [dx, dy] = [here[0] - last[0], here[1] - last[1]];
    travelled += Math.hypot(dx, dy);
    const others = [...held].filter(([id]) => id !== event.pointerId).map(([, point]) => point);
    if (others.length > 0) {
      const spread = (point) => Math.max(1, Math.hypot(point[0] - others[0][0], point[1] - others[0][1]));
      zoom(spread(here) / spread(last));
      move(dx / 2, dy / 2);
    } else if (event.shiftKey || event.buttons === 2) move(dx, dy);
    else if (travelled > CLICK_PX) turn(-0.4 * dx, 0.4 * dy);
    held.set(event.pointerId, here);
  });
  const letGo = (event) => {
    const last = held.get(event.pointerId);
    held.delete(event.pointerId);
    if (event.type !== "pointerup" || !last || travelled > CLICK_PX || event.button !== 0) return;
    const axis = nearest(...last);
    if (axis !== null) choose(picked.length === 1 ? [picked[0], axis.key] : [axis.key]);
  };
  canvas.addEventListener("pointerup", letGo);
  canvas.addEventListener("pointercancel", letGo);
  canvas.addEventListener("contextmenu", (event) => event.preventDefault());
  // A page that is being read must scroll: the wheel belongs to the picture only once it has been chosen.
  canvas.addEventListener("wheel", (event) => {
    if (document.activeElement !== canvas) return;
    event.preventDefault();
    zoom(Math.exp(-0.0015 * event.deltaY));
  }, { passive: false });
}

function listenToKeys() {
  const step = () => MOVE_SHARE * canvas.clientHeight;
  const arrows = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] };
  canvas.addEventListener("keydown", (event) => {
    if (event.ctrlKey || event.altKey || event.metaKey) return;
    const way = arrows[event.key];
    if (way && event.shiftKey) move(-way[0] * step(), -way[1] * step());
    else if (way) turn(TURN_DEG * way[0], -TURN_DEG * way[1]);
    else if (event.key === "+" || event.key === "=") zoom(ZOOM);
    else if (event.key === "-" || event.key === "_") zoom(1 / ZOOM);
    else if (event.key === "0") reset();
    else return;
    event.preventDefault();
  });
}

function listenToControls() {
  findAll("button[data-pose]").forEach((button) => button.addEventListener("click", () => {
    take(scene.poses.find((one) => one.key === button.dataset.pose), false);
  }));
  for (const part of partByKey.values()) {
    part.switch.addEventListener("change", () => {
      part.group.visible = part.switch.checked;
      if (untouched) fit(); else ask();
    });
  }
}

// ---- start ----------------------------------------------------------------------------------------------------------

function start() {
  findAll("select").forEach((select) => select.addEventListener("change", () => {
    picked = findAll("select").map((one) => one.value);
    measure();
  }));
  find(".bw-view-desk").hidden = false;
  const context = document.createElement("canvas").getContext("webgl2") && canvas.getContext("webgl2", { alpha: true, antialias: true });
  if (!context) { stopShowing(); return; }
  build(context);
  root.classList.add("bw-view-live");
  listenToPointers();
  listenToKeys();
  listenToControls();
  take(pose, true);
  new ResizeObserver(() => {
    const [width, height] = [canvas.clientWidth, canvas.clientHeight];
    if (width === 0 || height === 0) return;
    renderer.setPixelRatio(Math.min(window.devicePixelRatio || 1, 2));
    renderer.setSize(width, height, false);
    if (glide !== null) glide.to = fitted();
    if (untouched) fit(); else ask();
  }).observe(canvas);
  canvas.addEventListener("webglcontextlost", (event) => { event.preventDefault(); stopShowing(); });
}

// Without WebGL the still picture stays, and distances can be chosen from the lists.
function stopShowing() {
  renderer = null;
  root.classList.remove("bw-view-live");
  root.classList.add("bw-view-still-only");
}

start();
