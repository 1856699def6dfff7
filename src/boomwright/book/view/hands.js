// Hands on the picture: pointer, touch, wheel, keys, switches.

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
