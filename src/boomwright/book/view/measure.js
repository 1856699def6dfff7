// Measuring between axes, from the plan's numbers and never from the drawn surface; tags and dimensions on the picture.

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
