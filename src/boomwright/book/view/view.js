// The 3D view of the build book: the world, its poses, the drawing. Runs inside one function together with THREE
// (three.min.js), measure.js and hands.js; sees only its own section of the page. Points are in millimetres; the viewer
// looks along parallel lines, from `azimuth` and `elevation`, at `target`.

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
const TURN_DEG = 10, ZOOM = 1.2, MOVE_SHARE = 0.08;
const CLICK_PX = 5, REACH_PX = 12, TAG_PX = 26, EDGE_PX = 32, GLIDE_MS = 400;

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
    const dark = new THREE.Color().setRGB(...part.colour.map((channel) => 0.3 * channel), "srgb");
    const ink = new THREE.LineBasicMaterial({ color: dark });
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

function take(next, atOnce) {
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
    const end = { position, turn };
    const here = { position: part.group.position.clone(), turn: part.group.quaternion.clone() };
    moves.push({ part, start: before ? here : end, end });
  }
  untouched = true;
  const from = { target: look.target, span: look.span };
  glide = { moves, from, to: fitted(), since: atOnce || calm.matches ? -Infinity : performance.now() };
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
  // Room at the edge is for the tags.
  const [width, height] = [canvas.clientWidth, canvas.clientHeight].map((size) => Math.max(1, size - 2 * EDGE_PX));
  const pixel = Math.max((high[0] - low[0]) / width, (high[1] - low[1]) / height, 1e-3);
  return { target, span: pixel * Math.max(1, canvas.clientHeight) };
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

// ---- start ----------------------------------------------------------------------------------------------------------

function start() {
  findAll("select").forEach((select) => select.addEventListener("change", () => {
    picked = findAll("select").map((one) => one.value);
    measure();
  }));
  find(".bw-view-desk").hidden = false;
  const context = canvas.getContext("webgl2", { alpha: true, antialias: true });
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
