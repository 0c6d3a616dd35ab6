'use strict';
(() => {
// ---- The data -------------------------------------------------------------------------
const by = id => document.getElementById(id);
const D = JSON.parse(by('data').textContent);
const bytes = text => {
  const raw = atob(text), out = new Uint8Array(raw.length);
  for (let i = 0; i < raw.length; i++) out[i] = raw.charCodeAt(i);
  return out.buffer;
};
const rowBody = new Int32Array(bytes(D.rows)), paint = new Uint8Array(bytes(D.paint)), sites = new Float32Array(bytes(D.sites));
const hulls = new Int32Array(bytes(D.hulls)), others = new Int32Array(bytes(D.others)), counts = new Uint16Array(bytes(D.counts));
const loops = new Uint16Array(bytes(D.loops)), points = new Float32Array(bytes(D.points));
const patches = new Int32Array(bytes(D.patches)), patched = new Float32Array(bytes(D.patched)), roomEdges = new Float32Array(bytes(D.edges));
const bodies = paint.length / 4, hullCount = hulls.length / 3, WALL = -1, SEAM = -2; // -3: a seam that is a wall in part
const MARK = { over: 1, under: 2, missing: 3 };
const middle = D.middle, reach = [0, 1, 2].map(k => (D.hi[k] - D.lo[k]) / 2), radius = Math.hypot(...reach) || 1;

// Where each hull, face and loop begins, and the planes of the faces: n · p <= d inside.
const firstFace = new Int32Array(hullCount + 1), firstPoint = new Int32Array(hullCount + 1), firstLoop = new Int32Array(others.length + 1);
for (let h = 0; h < hullCount; h++) {
  firstPoint[h + 1] = firstPoint[h] + hulls[3 * h + 1];
  firstFace[h + 1] = firstFace[h] + hulls[3 * h + 2];
}
for (let f = 0; f < others.length; f++) firstLoop[f + 1] = firstLoop[f] + counts[f];
const planes = new Float64Array(4 * others.length);
for (let h = 0; h < hullCount; h++) {
  for (let f = firstFace[h]; f < firstFace[h + 1]; f++) {
    const at = k => 3 * (firstPoint[h] + loops[firstLoop[f] + k]), o = at(0);
    let x = 0, y = 0, z = 0;
    for (let k = 2; k < counts[f]; k++) {
      const a = at(k - 1), b = at(k);
      const ax = points[a] - points[o], ay = points[a + 1] - points[o + 1], az = points[a + 2] - points[o + 2];
      const bx = points[b] - points[o], by = points[b + 1] - points[o + 1], bz = points[b + 2] - points[o + 2];
      x += ay * bz - az * by; y += az * bx - ax * bz; z += ax * by - ay * bx;
    }
    const l = Math.hypot(x, y, z) || 1;
    planes.set([x / l, y / l, z / l, (x * points[o] + y * points[o + 1] + z * points[o + 2]) / l], 4 * f);
  }
}
// Edges within seams are none: the cell goes on beyond them.
const seams = Array.from({ length: hullCount }, (_, h) => {
  const list = [];
  for (let f = firstFace[h]; f < firstFace[h + 1]; f++) if (others[f] === SEAM) list.push(4 * f);
  return list;
});
const inSeam = (h, from, i, j) => {
  for (const s of seams[h]) {
    const off = o => Math.abs(planes[s] * from[o] + planes[s + 1] * from[o + 1] + planes[s + 2] * from[o + 2] - planes[s + 3]) < 1e-5 * radius;
    if (off(i) && off(j)) return true;
  }
  return false;
};
const bodyRows = Array.from({ length: bodies }, () => []);
rowBody.forEach((b, r) => bodyRows[b].push(r));
const bodyHulls = Array.from({ length: bodies }, () => []);
for (let h = 0; h < hullCount; h++) bodyHulls[hulls[3 * h]].push(h);
const nameOf = b => bodyRows[b].map(r => D.ids[r]).join(', ');
const compare = new Intl.Collator('en', { numeric: true }).compare;
const order = Array.from({ length: bodies }, (_, b) => b);
{
  const names = order.map(nameOf);
  order.sort((a, b) => compare(names[a], names[b]) || a - b);
}
const rank = new Int32Array(bodies);
order.forEach((b, k) => { rank[b] = k; });
const withUnit = (text, unit) => unit ? text + ' ' + unit : text;
const round = v => v === 0 ? '0' : String(Number(v.toPrecision(4)));

const neighbours = b => {
  const list = new Set();
  for (const h of bodyHulls[b]) for (let f = firstFace[h]; f < firstFace[h + 1]; f++) if (others[f] >= 0) list.add(others[f]);
  return [...list].sort((p, q) => rank[p] - rank[q]);
};

// ---- What is shown --------------------------------------------------------------------
const start = { yaw: Math.atan2(D.from[1], D.from[0]), pitch: Math.atan2(D.from[2], Math.hypot(D.from[0], D.from[1])) };
const cam = { yaw: 0, pitch: 0, zoom: 1, pan: [0, 0, 0] };
const cut = { axis: -1, at: 0, side: 1, area: 0 }; // side 1: what is above goes
let picked = -1, show = 'all', wallsOn = true;
const shown = new Uint8Array(bodies).fill(1);

const chooseShown = () => {
  if (picked < 0 && (show === 'alone' || show === 'near')) show = 'all';
  const near = show === 'near' ? new Set([picked, ...neighbours(picked)]) : null;
  for (let b = 0; b < bodies; b++) {
    shown[b] = show === 'all' || (show === 'alone' && b === picked) || (near !== null && near.has(b)) || paint[4 * b + 3] === MARK[show] ? 1 : 0;
  }
};

// A growing list of numbers.
class Grow {
  constructor(type) { this.type = type; this.a = new type(4096); this.n = 0; }
  room(k) {
    if (this.n + k <= this.a.length) return;
    const bigger = new this.type(2 * (this.n + k));
    bigger.set(this.a.subarray(0, this.n));
    this.a = bigger;
  }
  get list() { return this.a.subarray(0, this.n); }
}
// Triangles with colours, and lines, of plane convex polygons.
class Mesh {
  constructor() { this.p = new Grow(Float32Array); this.c = new Grow(Uint8Array); this.l = new Grow(Float32Array); }
  polygon(b, from, at, n, h) { // at(k): where the corner k begins in from; h: its hull, whose seams give no lines
    this.p.room(9 * (n - 2)); this.c.room(12 * (n - 2)); this.l.room(6 * n);
    const { p, c, l } = this;
    for (let k = 2; k < n; k++) {
      for (const o of [at(0), at(k - 1), at(k)]) {
        p.a[p.n++] = from[o]; p.a[p.n++] = from[o + 1]; p.a[p.n++] = from[o + 2];
        c.a[c.n++] = paint[4 * b]; c.a[c.n++] = paint[4 * b + 1]; c.a[c.n++] = paint[4 * b + 2]; c.a[c.n++] = 40 * paint[4 * b + 3];
      }
    }
    for (let k = 0; k < n; k++) {
      if (h !== undefined && inSeam(h, from, at(k), at((k + 1) % n))) continue;
      for (const o of [at(k), at((k + 1) % n)]) { l.a[l.n++] = from[o]; l.a[l.n++] = from[o + 1]; l.a[l.n++] = from[o + 2]; }
    }
  }
}

// outside are the faces that can be seen: walls, and those towards what is not shown.
const outside = all => {
  const m = new Mesh();
  for (let h = 0; h < hullCount; h++) {
    const b = hulls[3 * h];
    if (!all && !shown[b]) continue;
    for (let f = firstFace[h]; f < firstFace[h + 1]; f++) {
      const o = others[f];
      if (o === WALL || (!all && o >= 0 && !shown[o])) m.polygon(b, points, k => 3 * (firstPoint[h] + loops[firstLoop[f] + k]), counts[f], h);
    }
  }
  for (let i = 0, o = 0; i < patches.length; i += 2) {
    if (all || shown[patches[i]]) { const from = o; m.polygon(patches[i], patched, k => from + 3 * k, patches[i + 1]); }
    o += 3 * patches[i + 1];
  }
  return m;
};

// section is the convex polygon in which the cut meets a hull, as a list of coordinates.
const section = h => {
  const a = cut.axis, at = cut.at - middle[a], tol = 1e-6 * radius, s = cut.side, found = [];
  const lo = firstPoint[h], hi = firstPoint[h + 1];
  let least = Infinity, most = -Infinity;
  for (let i = lo; i < hi; i++) {
    const d = s * (points[3 * i + a] - at);
    if (d < least) least = d;
    if (d > most) most = d;
  }
  if (least >= -tol || most < -tol) return null; // all of it goes, or none reaches the cut
  const flat = i => { const p = [points[3 * i], points[3 * i + 1], points[3 * i + 2]]; p[a] = at; return p; };
  for (let i = lo; i < hi; i++) if (Math.abs(points[3 * i + a] - at) <= tol) found.push(flat(i));
  for (let f = firstFace[h]; f < firstFace[h + 1]; f++) {
    for (let k = 0; k < counts[f]; k++) {
      const i = loops[firstLoop[f] + k], j = loops[firstLoop[f] + (k + 1) % counts[f]];
      if (i >= j) continue; // its other face has it the other way round
      const p = 3 * (lo + i), q = 3 * (lo + j), dp = points[p + a] - at, dq = points[q + a] - at;
      if (!(dp > tol && dq < -tol) && !(dp < -tol && dq > tol)) continue;
      const t = dp / (dp - dq), x = [0, 1, 2].map(c => points[p + c] + t * (points[q + c] - points[p + c]));
      x[a] = at;
      found.push(x);
    }
  }
  if (found.length < 3) return null;
  const u = (a + 1) % 3, v = (a + 2) % 3, m = [0, 0, 0];
  for (const p of found) { m[u] += p[u] / found.length; m[v] += p[v] / found.length; }
  for (const p of found) p.angle = Math.atan2(p[v] - m[v], p[u] - m[u]);
  found.sort((p, q) => p.angle - q.angle);
  return found;
};
const areaOf = (list, a) => {
  const u = (a + 1) % 3, v = (a + 2) % 3, o = list[0];
  let sum = 0;
  for (let k = 2; k < list.length; k++) sum += (list[k - 1][u] - o[u]) * (list[k][v] - o[v]) - (list[k][u] - o[u]) * (list[k - 1][v] - o[v]);
  return sum / 2;
};
const cutAreas = new Float64Array(bodies);
const caps = () => {
  const m = new Mesh();
  cut.area = 0;
  cutAreas.fill(0);
  if (cut.axis < 0) return m;
  for (let h = 0; h < hullCount; h++) {
    const b = hulls[3 * h], list = shown[b] ? section(h) : null;
    if (!list) continue;
    const area = areaOf(list, cut.axis);
    cut.area += area;
    cutAreas[b] += area;
    m.polygon(b, list.flat(), k => 3 * k, list.length, h);
  }
  return m;
};

// ---- The camera -----------------------------------------------------------------------
const stage = by('stage'), room = by('room'), over = by('over');
const tall = 1 / Math.tan(Math.PI / 11); // half of the angle of view, upward
let wide = 1, high = 1, eye, matrix;
const axes = () => {
  const cy = Math.cos(cam.yaw), sy = Math.sin(cam.yaw), cp = Math.cos(cam.pitch), sp = Math.sin(cam.pitch);
  return { d: [cp * cy, cp * sy, sp], r: [-sy, cy, 0], u: [-sp * cy, -sp * sy, cp] };
};
const dot = (a, b) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
// far enough that the whole room is seen, as it lies now at first, at zoom 1.
const distance = () => {
  const { d, r, u } = axes(), side = tall / (wide / high);
  let far = 0;
  for (let c = 0; c < 8; c++) {
    const p = [0, 1, 2].map(k => (c >> k & 1 ? 1 : -1) * reach[k]);
    far = Math.max(far, dot(d, p) + 1.08 * Math.max(side * Math.abs(dot(r, p)), tall * Math.abs(dot(u, p))));
  }
  return Math.max(far, 0.1 * radius) / cam.zoom;
};
const look = () => {
  const { d, r, u } = axes(), dist = eye.dist, t = cam.pan, near = Math.max(dist - 1.1 * radius - Math.hypot(...t), dist * 0.005), far = dist + 1.1 * radius + Math.hypot(...t);
  const fx = tall * high / wide, A = (far + near) / (near - far), B = 2 * far * near / (near - far);
  const row = (v, f) => [f * v[0], f * v[1], f * v[2], -f * dot(v, t)];
  const X = row(r, fx), Y = row(u, tall), Z = [A * d[0], A * d[1], A * d[2], A * (-dot(d, t) - dist) + B], W = [-d[0], -d[1], -d[2], dot(d, t) + dist];
  matrix = new Float32Array(16);
  for (let k = 0; k < 4; k++) matrix.set([X[k], Y[k], Z[k], W[k]], 4 * k);
};
// where a place is in the picture, in pixels of the page; null behind the eye.
const project = (x, y, z) => {
  const m = matrix, w = m[3] * x + m[7] * y + m[11] * z + m[15];
  if (!(w > 1e-6)) return null;
  return [((m[0] * x + m[4] * y + m[8] * z + m[12]) / w + 1) * wide / 2, (1 - (m[1] * x + m[5] * y + m[9] * z + m[13]) / w) * high / 2];
};
// the ray through a place in the picture.
const ray = (px, py) => {
  const { d, r, u } = axes(), a = (2 * px / wide - 1) * wide / high / tall, b = (1 - 2 * py / high) / tall, t = cam.pan, dist = eye.dist;
  return { from: [0, 1, 2].map(k => t[k] + d[k] * dist), along: [0, 1, 2].map(k => a * r[k] + b * u[k] - d[k]) };
};
// the body that a ray meets first, of what is shown and not cut away; -1: none.
const meet = ({ from, along }) => {
  let lo0 = 0, hi0 = Infinity, best = Infinity, found = -1;
  if (cut.axis >= 0) {
    const n = cut.side * along[cut.axis], d = cut.side * (cut.at - middle[cut.axis] - from[cut.axis]);
    if (n > 0) hi0 = d / n; else if (n < 0) lo0 = Math.max(0, d / n); else if (d < 0) return -1;
  }
  for (let h = 0; h < hullCount; h++) {
    if (!shown[hulls[3 * h]]) continue;
    let lo = lo0, hi = Math.min(hi0, best);
    for (let f = firstFace[h]; f < firstFace[h + 1] && lo < hi; f++) {
      const i = 4 * f, n = planes[i] * along[0] + planes[i + 1] * along[1] + planes[i + 2] * along[2];
      const d = planes[i + 3] - planes[i] * from[0] - planes[i + 1] * from[1] - planes[i + 2] * from[2];
      if (n > 0) { if (d / n < hi) hi = d / n; } else if (n < 0) { if (d / n > lo) lo = d / n; } else if (d < 0) hi = -1;
    }
    if (lo < hi && lo < best) { best = lo; found = hulls[3 * h]; }
  }
  return found;
};

// ---- Drawing --------------------------------------------------------------------------
const VERTEX = `attribute vec3 place; attribute vec4 colour; uniform mat4 look; varying vec3 at; varying vec4 ink;
void main() { at = place; ink = colour; gl_Position = look * vec4(place, 1.0); }`;
const FRAGMENT = `#ifdef GL_FRAGMENT_PRECISION_HIGH
precision highp float;
#else
precision mediump float;
#endif
uniform vec4 gone; uniform vec4 plain; uniform float dots; varying vec3 at; varying vec4 ink;
void main() {
  if (dot(gone.xyz, at) > gone.w) discard;
  if (plain.a > 0.0) { gl_FragColor = plain; return; }
  float mark = floor(ink.a * 255.0 / 40.0 + 0.5), line = 1.0;
  vec2 p = gl_FragCoord.xy / dots;
  if (mark == 1.0) line = mod(p.x - p.y, 9.0);
  else if (mark == 2.0) line = mod(p.x + p.y, 9.0);
  else if (mark == 3.0) line = mod(p.y, 6.0);
  gl_FragColor = vec4(line < 1.0 && mark > 0.0 ? vec3(0.13) : ink.rgb, 1.0);
}`;
let gl = null, program, place = {}, buffers = {};
const startGL = () => {
  const options = { antialias: true, alpha: true, premultipliedAlpha: true, preserveDrawingBuffer: false, depth: true };
  gl = room.getContext('webgl', options) || room.getContext('experimental-webgl', options);
  if (!gl) return 'This browser has no WebGL';
  program = gl.createProgram();
  for (const [kind, text] of [[gl.VERTEX_SHADER, VERTEX], [gl.FRAGMENT_SHADER, FRAGMENT]]) {
    const s = gl.createShader(kind);
    gl.shaderSource(s, text);
    gl.compileShader(s);
    gl.attachShader(program, s);
  }
  gl.linkProgram(program);
  if (!gl.getProgramParameter(program, gl.LINK_STATUS)) return 'The graphics of this browser do not take the program';
  gl.useProgram(program);
  place = { place: gl.getAttribLocation(program, 'place'), colour: gl.getAttribLocation(program, 'colour') };
  for (const name of ['look', 'gone', 'plain', 'dots']) place[name] = gl.getUniformLocation(program, name);
  buffers = {};
  const walls = outside(true);
  put('walls', walls.p.list);
  put('edges', roomEdges);
  return '';
};
const put = (name, data) => {
  const b = buffers[name] || (buffers[name] = { buffer: gl.createBuffer(), n: 0 });
  gl.bindBuffer(gl.ARRAY_BUFFER, b.buffer);
  gl.bufferData(gl.ARRAY_BUFFER, data, gl.DYNAMIC_DRAW);
  b.n = data.length / 3;
};
const paintBuffer = (kind, name, colours) => {
  const b = buffers[name];
  if (!b || b.n === 0) return;
  gl.bindBuffer(gl.ARRAY_BUFFER, b.buffer);
  gl.enableVertexAttribArray(place.place);
  gl.vertexAttribPointer(place.place, 3, gl.FLOAT, false, 0, 0);
  if (colours) {
    gl.bindBuffer(gl.ARRAY_BUFFER, buffers[colours].buffer);
    gl.enableVertexAttribArray(place.colour);
    gl.vertexAttribPointer(place.colour, 4, gl.UNSIGNED_BYTE, true, 0, 0);
  } else {
    gl.disableVertexAttribArray(place.colour);
  }
  gl.drawArrays(kind, 0, b.n);
};
let stale = { faces: true, caps: true }, waiting = false, theme = {};
const readTheme = () => {
  const css = getComputedStyle(document.documentElement), rgb = name => {
    const v = css.getPropertyValue(name).trim();
    return [1, 3, 5].map(k => parseInt(v.slice(k, k + 2), 16) / 255);
  };
  theme = { ink: rgb('--ink'), mark: css.getPropertyValue('--mark').trim(), text: css.getPropertyValue('--ink').trim(), paper: css.getPropertyValue('--stage').trim() };
};
const rebuild = () => {
  if (stale.faces) {
    const m = outside(false);
    put('faces', m.p.list); put('lines', m.l.list);
    gl.bindBuffer(gl.ARRAY_BUFFER, (buffers.colours || (buffers.colours = { buffer: gl.createBuffer() })).buffer);
    gl.bufferData(gl.ARRAY_BUFFER, m.c.list, gl.DYNAMIC_DRAW);
  }
  if (stale.faces || stale.caps) {
    const m = caps();
    put('caps', m.p.list); put('capLines', m.l.list);
    gl.bindBuffer(gl.ARRAY_BUFFER, (buffers.capColours || (buffers.capColours = { buffer: gl.createBuffer() })).buffer);
    gl.bufferData(gl.ARRAY_BUFFER, m.c.list, gl.DYNAMIC_DRAW);
    tellCut();
  }
  stale = { faces: false, caps: false };
};
// Where a picture takes long, as without graphics hardware, it is drawn in half as many dots
// each way and without the lines within while it moves, and in full once it rests.
const pace = { last: 0, slow: 0, rest: 0, coarse: false };
const keepPace = () => {
  const now = performance.now(), took = now - pace.last;
  pace.last = now;
  if (took > 45 && took < 400) pace.slow = Math.min(pace.slow + 1, 3); else if (took <= 45 && !pace.coarse) pace.slow = 0;
  pace.coarse = pace.slow >= 2;
  clearTimeout(pace.rest);
  pace.rest = setTimeout(() => { const again = pace.coarse; pace.slow = 0; pace.coarse = false; if (again) draw(); }, 250);
};
const draw = () => {
  waiting = false;
  if (!gl || gl.isContextLost()) return;
  const full = Math.min(window.devicePixelRatio || 1, 2), dots = pace.coarse ? full / 2 : full;
  const w = Math.max(1, Math.round(wide * dots)), h = Math.max(1, Math.round(high * dots));
  for (const [c, by] of [[room, dots], [over, full]]) {
    const cw = Math.max(1, Math.round(wide * by)), ch = Math.max(1, Math.round(high * by));
    if (c.width !== cw || c.height !== ch) { c.width = cw; c.height = ch; }
  }
  rebuild();
  look();
  gl.viewport(0, 0, w, h);
  gl.clearColor(0, 0, 0, 0);
  gl.clear(gl.COLOR_BUFFER_BIT | gl.DEPTH_BUFFER_BIT);
  gl.enable(gl.DEPTH_TEST);
  gl.depthFunc(gl.LEQUAL);
  gl.uniformMatrix4fv(place.look, false, matrix);
  gl.uniform1f(place.dots, dots);
  const gone = [0, 0, 0, 1];
  if (cut.axis >= 0) { gone[cut.axis] = cut.side; gone[3] = cut.side * (cut.at - middle[cut.axis]); }
  const colour = (rgb, a) => gl.uniform4f(place.plain, rgb[0] * a, rgb[1] * a, rgb[2] * a, a);
  const clip = on => gl.uniform4fv(place.gone, on ? gone : [0, 0, 0, 1]);
  gl.blendFunc(gl.ONE, gl.ONE_MINUS_SRC_ALPHA);
  if (wallsOn && (show !== 'all' || cut.axis >= 0)) { // under the cells, whose colours stay those of the scale
    gl.enable(gl.BLEND);
    gl.depthMask(false);
    clip(false);
    colour(theme.ink, 0.045);
    paintBuffer(gl.TRIANGLES, 'walls');
    gl.depthMask(true);
  }
  gl.disable(gl.BLEND);
  colour([0, 0, 0], 0);
  gl.enable(gl.CULL_FACE); // faces are seen from outside alone: caps close what is cut
  clip(true); paintBuffer(gl.TRIANGLES, 'faces', 'colours');
  gl.disable(gl.CULL_FACE);
  clip(false); paintBuffer(gl.TRIANGLES, 'caps', 'capColours');
  gl.enable(gl.BLEND);
  const shifted = (x, y) => { // by pixels; and a little towards the eye, so that a line is not lost in its own face
    const moved = matrix.slice();
    for (let k = 0; k < 4; k++) {
      const W = matrix[4 * k + 3];
      moved[4 * k] += 2 * x / w * W; moved[4 * k + 1] += 2 * y / h * W; moved[4 * k + 2] -= 1.5e-3 * W;
    }
    gl.uniformMatrix4fv(place.look, false, moved);
  };
  shifted(0, 0);
  colour([0.12, 0.13, 0.14], 0.6);
  if (!pace.coarse || buffers.lines.n < 20000) { clip(true); paintBuffer(gl.LINES, 'lines'); }
  clip(false);
  paintBuffer(gl.LINES, 'capLines');
  if (wallsOn) {
    gl.depthMask(false);
    colour(theme.ink, 0.9);
    for (const [x, y] of [[-0.7, 0], [0.7, 0], [0, -0.7], [0, 0.7]]) { // lines are one pixel wide: four of them are two
      shifted(x, y);
      paintBuffer(gl.LINES, 'edges');
    }
    gl.uniformMatrix4fv(place.look, false, matrix);
    gl.disable(gl.DEPTH_TEST);
    colour(theme.ink, 0.22); paintBuffer(gl.LINES, 'edges');
    gl.depthMask(true);
  }
  drawOver(full);
};
// The picked cell's outline, its name and the axes lie over the picture.
const drawOver = dots => {
  const c = over.getContext('2d');
  c.setTransform(dots, 0, 0, dots, 0, 0);
  c.clearRect(0, 0, wide, high);
  c.lineJoin = c.lineCap = 'round';
  c.font = '13px "Liberation Sans", Arial, sans-serif';
  if (picked >= 0) {
    c.beginPath();
    for (const h of bodyHulls[picked]) for (let f = firstFace[h]; f < firstFace[h + 1]; f++) {
      if (others[f] <= SEAM) continue;
      const corner = k => 3 * (firstPoint[h] + loops[firstLoop[f] + k % counts[f]]);
      for (let k = 0; k < counts[f]; k++) {
        const i = corner(k), j = corner(k + 1), p = project(points[i], points[i + 1], points[i + 2]), q = project(points[j], points[j + 1], points[j + 2]);
        if (p && q && !inSeam(h, points, i, j)) { c.moveTo(p[0], p[1]); c.lineTo(q[0], q[1]); }
      }
    }
    c.strokeStyle = theme.paper; c.lineWidth = 4.5; c.stroke();
    c.strokeStyle = theme.mark; c.lineWidth = 2; c.stroke();
    const at = project(sites[3 * picked], sites[3 * picked + 1], sites[3 * picked + 2]);
    if (at) {
      c.beginPath(); c.arc(at[0], at[1], 4, 0, 2 * Math.PI);
      c.fillStyle = theme.mark; c.fill(); c.strokeStyle = theme.paper; c.lineWidth = 1.5; c.stroke();
      word(c, nameOf(picked), at[0] + 8, at[1] - 6);
    }
  }
  const { r, u } = axes(), o = [34, high - 34];
  for (let k = 0; k < 3; k++) {
    const x = r[k], y = -u[k];
    if (Math.hypot(x, y) < 0.05) continue;
    c.beginPath(); c.moveTo(o[0], o[1]); c.lineTo(o[0] + 20 * x, o[1] + 20 * y);
    c.strokeStyle = theme.text; c.lineWidth = 1.5; c.stroke();
    c.textAlign = 'center';
    word(c, 'xyz'[k], o[0] + 28 * x, o[1] + 28 * y + 4);
    c.textAlign = 'start';
  }
};
const word = (c, text, x, y) => {
  const room = c.measureText(text).width;
  if (c.textAlign !== 'center') x = Math.max(4, Math.min(x, wide - room - 4));
  c.strokeStyle = theme.paper; c.lineWidth = 4; c.strokeText(text, x, y);
  c.fillStyle = theme.text; c.fillText(text, x, y);
};
const again = () => {
  if (!waiting && gl) { waiting = true; requestAnimationFrame(() => { keepPace(); draw(); }); }
};

// ---- What one can do ------------------------------------------------------------------
const refit = () => { eye = { dist: distance() }; };
const reset = () => {
  cam.yaw = start.yaw; cam.pitch = Math.max(-Math.PI / 2, Math.min(Math.PI / 2, start.pitch)); cam.zoom = 1; cam.pan = [0, 0, 0];
  refit();
  again();
};
const turn = (yaw, pitch) => {
  cam.yaw += yaw;
  cam.pitch = Math.max(-Math.PI / 2, Math.min(Math.PI / 2, cam.pitch + pitch));
  again();
};
const zoom = by => {
  cam.zoom = Math.max(0.2, Math.min(40, cam.zoom * by));
  eye.dist = Math.max(eye.dist / by, 0.02 * radius);
  again();
};
const move = (dx, dy) => { // by pixels
  const { r, u } = axes(), k = 2 * eye.dist / tall / high;
  for (let i = 0; i < 3; i++) cam.pan[i] = Math.max(-2 * radius, Math.min(2 * radius, cam.pan[i] - (r[i] * dx - u[i] * dy) * k));
  again();
};
const setCut = (axis, at) => {
  if (axis !== cut.axis && axis >= 0) {
    cut.side = axes().d[axis] >= 0 ? 1 : -1; // what is nearer to the eye goes
    if (at === undefined) at = middle[axis];
  }
  cut.axis = axis;
  if (axis >= 0 && Number.isFinite(at)) cut.at = Math.max(D.lo[axis], Math.min(D.hi[axis], at));
  stale.caps = true;
  by('axis').value = String(axis);
  for (const id of ['place', 'slide', 'turned']) by(id).disabled = axis < 0;
  if (axis >= 0) {
    by('place').value = String(Number(cut.at.toPrecision(6)));
    by('slide').value = String(Math.round(1000 * (cut.at - D.lo[axis]) / ((D.hi[axis] - D.lo[axis]) || 1)));
    by('slide').setAttribute('aria-valuetext', withUnit(round(cut.at), D.length));
  }
  again();
};
const turnCut = () => {
  if (cut.axis < 0) return;
  cut.side = -cut.side;
  by('turned').checked = !by('turned').checked;
  stale.caps = true;
  again();
};
const tellCut = () => {
  if (cut.axis < 0) { by('cut').textContent = 'not cut'; return; }
  const a = 'xyz'[cut.axis];
  by('cut').textContent = `Cut at ${a} = ${withUnit(round(cut.at), D.length)}: ${withUnit(round(cut.area), D.length && D.length + '²')} of the shown cells; what has ${cut.side > 0 ? 'more' : 'less'} ${a} is taken away.`;
  if (picked >= 0) tellPicked();
};
const setShow = to => {
  show = to;
  chooseShown();
  by('show').value = show;
  stale.faces = true;
  again();
};
const element = (name, text) => {
  const e = document.createElement(name);
  if (text !== undefined) e.textContent = text;
  return e;
};
const pick = b => {
  picked = b;
  if (show === 'alone' || show === 'near') setShow(show);
  by('name').value = b < 0 ? '' : nameOf(b);
  tellPicked();
  again();
};
const tellPicked = () => {
  const out = by('picked');
  if (picked < 0) { out.replaceChildren('No cell is picked: click or tap one, or type its identifier.'); return; }
  const made = [element('h2', nameOf(picked))], list = element('dl');
  const fact = (name, text) => list.append(element('dt', name), element('dd', text));
  for (const r of bodyRows[picked]) {
    if (bodyRows[picked].length > 1) fact('site', D.ids[r]);
    fact(D.value, D.values[r] === '' ? 'no value' : withUnit(D.values[r], D.unit));
    fact('volume', withUnit(D.volumes[r], D.volumeUnit));
  }
  const mark = { 1: 'over the limit', 2: 'under the limit' }[paint[4 * picked + 3]];
  if (mark) fact('', mark);
  fact('site at', withUnit(D.places[picked], D.length));
  if (cut.axis >= 0) fact('in the cut', withUnit(round(cutAreas[picked]), D.length && D.length + '²'));
  const near = neighbours(picked), ul = element('ul');
  fact('touches', near.length === 1 ? '1 cell' : near.length + ' cells');
  for (const b of near) {
    const button = element('button', nameOf(b));
    button.type = 'button';
    button.addEventListener('click', () => { pick(b); by('picked').querySelector('button')?.focus(); });
    const li = element('li');
    li.append(button);
    ul.append(li);
  }
  ul.setAttribute('aria-label', 'cells that it touches');
  made.push(list, ul);
  out.replaceChildren(...made);
};
const step = by => pick(order[picked < 0 ? (by > 0 ? 0 : bodies - 1) : (rank[picked] + by + bodies) % bodies]);
const byName = text => {
  const want = text.trim().toLowerCase();
  return want === '' ? -1 : order.find(b => nameOf(b).toLowerCase() === want || bodyRows[b].some(r => D.ids[r].toLowerCase() === want)) ?? -1;
};
const moveCut = (share, fine) => {
  if (cut.axis < 0) setCut(2);
  setCut(cut.axis, cut.at + share * (fine ? 0.1 : 1) * (D.hi[cut.axis] - D.lo[cut.axis]));
};

// ---- Mouse, fingers, keys -------------------------------------------------------------
const fingers = new Map();
let moved = 0;
const placeIn = e => { const r = over.getBoundingClientRect(); return [e.clientX - r.left, e.clientY - r.top]; };
over.addEventListener('pointerdown', e => {
  over.setPointerCapture(e.pointerId);
  fingers.set(e.pointerId, placeIn(e));
  if (fingers.size === 1) moved = 0; else moved = 99;
});
over.addEventListener('pointermove', e => {
  const was = fingers.get(e.pointerId);
  if (!was) return;
  const now = placeIn(e), dx = now[0] - was[0], dy = now[1] - was[1];
  moved += Math.hypot(dx, dy);
  if (fingers.size === 1) {
    if (e.shiftKey || e.buttons === 2 || e.buttons === 4) move(dx, dy); else if (moved > 3) turn(-dx * 0.008, dy * 0.008);
  } else {
    const other = [...fingers].find(([id]) => id !== e.pointerId)[1];
    const before = Math.hypot(was[0] - other[0], was[1] - other[1]), after = Math.hypot(now[0] - other[0], now[1] - other[1]);
    if (before > 10 && after > 10) zoom(after / before);
    move(dx / 2, dy / 2);
  }
  fingers.set(e.pointerId, now);
});
const lift = e => {
  if (!fingers.delete(e.pointerId) || e.type === 'pointercancel') return;
  if (moved <= 3 && e.button === 0 && gl) { look(); pick(meet(ray(...placeIn(e)))); }
};
over.addEventListener('pointerup', lift);
over.addEventListener('pointercancel', lift);
over.addEventListener('contextmenu', e => e.preventDefault());
over.addEventListener('wheel', e => { e.preventDefault(); zoom(Math.exp(-Math.max(-200, Math.min(200, e.deltaY)) * 0.0015)); }, { passive: false });
const near = Math.PI / 36;
const keys = {
  ArrowLeft: e => e.shiftKey ? move(-30, 0) : turn(-near, 0), ArrowRight: e => e.shiftKey ? move(30, 0) : turn(near, 0),
  ArrowUp: e => e.shiftKey ? move(0, -30) : turn(0, near), ArrowDown: e => e.shiftKey ? move(0, 30) : turn(0, -near),
  '+': () => zoom(1.15), '=': () => zoom(1.15), '-': () => zoom(1 / 1.15), '−': () => zoom(1 / 1.15),
  x: () => setCut(cut.axis === 0 ? -1 : 0), y: () => setCut(cut.axis === 1 ? -1 : 1), z: () => setCut(cut.axis === 2 ? -1 : 2),
  PageUp: e => moveCut(0.05, e.shiftKey), PageDown: e => moveCut(-0.05, e.shiftKey), o: turnCut,
  n: () => step(1), p: () => step(-1), w: () => by('walls').click(), Home: reset,
  Enter: () => { if (picked >= 0) setShow({ alone: 'near', near: 'all' }[show] || 'alone'); },
  Escape: () => { pick(-1); setShow('all'); },
};
over.addEventListener('keydown', e => {
  const act = keys[e.key] || keys[e.key.toLowerCase()];
  if (!act || e.ctrlKey || e.metaKey || e.altKey) return;
  e.preventDefault();
  act(e);
});
by('axis').addEventListener('change', e => setCut(Number(e.target.value)));
by('place').addEventListener('change', e => { if (e.target.value !== '') setCut(cut.axis, Number(e.target.value)); });
by('slide').addEventListener('input', e => setCut(cut.axis, D.lo[cut.axis] + e.target.value / 1000 * (D.hi[cut.axis] - D.lo[cut.axis])));
by('turned').addEventListener('change', e => { e.target.checked = !e.target.checked; turnCut(); });
by('show').addEventListener('change', e => {
  if ((e.target.value === 'alone' || e.target.value === 'near') && picked < 0) step(1);
  setShow(e.target.value);
});
by('walls').addEventListener('change', e => { wallsOn = e.target.checked; again(); });
by('reset').addEventListener('click', reset);
by('before').addEventListener('click', () => step(-1));
by('after').addEventListener('click', () => step(1));
by('none').addEventListener('click', () => pick(-1));
const offer = () => {
  const want = by('name').value.trim().toLowerCase(), list = [];
  for (const b of order) {
    const name = nameOf(b);
    if (name.toLowerCase().includes(want)) list.push(name);
    if (list.length === 30) break;
  }
  by('names').replaceChildren(...list.map(n => { const o = element('option'); o.value = n; return o; }));
};
by('name').addEventListener('focus', offer);
by('name').addEventListener('input', () => {
  offer();
  const b = byName(by('name').value);
  if (b >= 0 && b !== picked) { const typed = by('name').value; pick(b); by('name').value = typed; }
});
by('name').addEventListener('change', () => {
  const b = byName(by('name').value);
  if (b >= 0) { pick(b); return; }
  const text = by('name').value.trim();
  if (text) { picked = -1; tellPicked(); by('picked').textContent = `No cell is called “${text}”.`; again(); }
});

// ---- The beginning --------------------------------------------------------------------
const onlyStill = why => {
  gl = null;
  stage.hidden = by('cutting').hidden = by('showing').hidden = by('keys').hidden = true;
  by('still').hidden = false;
  by('sorry').hidden = false;
  by('sorry').textContent = why + ': the cells cannot be turned here, but this is a still picture of them, and their numbers can be looked up.';
  document.documentElement.dataset.view = 'still';
};
const size = () => {
  const w = stage.clientWidth, h = stage.clientHeight;
  if (w === 0 || h === 0 || (w === wide && h === high)) return;
  const at = eye ? distance() * cam.zoom : 0;
  wide = w; high = h;
  if (!eye) refit(); else eye.dist *= distance() * cam.zoom / at;
  again();
};
by('live').hidden = false;
readTheme();
window.matchMedia('(prefers-color-scheme: dark)').addEventListener('change', () => { readTheme(); again(); });
const begin = () => {
  const why = startGL();
  if (why) { onlyStill(why); return; }
  stage.hidden = by('cutting').hidden = by('showing').hidden = by('keys').hidden = false;
  by('still').hidden = true;
  by('sorry').hidden = true;
  stale = { faces: true, caps: true };
  size();
  document.documentElement.dataset.view = 'turning';
  again();
};
room.addEventListener('webglcontextlost', e => { e.preventDefault(); onlyStill('The graphics of this browser have gone'); });
room.addEventListener('webglcontextrestored', begin);
wide = stage.clientWidth || 1; high = stage.clientHeight || 1;
reset();
if (by('keys').open && window.innerWidth < 768) by('keys').open = false;
begin();
new ResizeObserver(size).observe(stage);
// For whoever scripts the page: identifiers in, facts out.
window.cells = {
  draw, turn, cut: (axis, at) => setCut('xyz'.indexOf(axis), at), pick: id => pick(byName(id)), show: setShow,
  where: id => { const b = byName(id); look(); return project(sites[3 * b], sites[3 * b + 1], sites[3 * b + 2]); },
  at: (x, y) => { look(); const b = meet(ray(x, y)); return b < 0 ? '' : nameOf(b); },
  ray: (x, y) => { const r = ray(x, y); return { from: r.from.map((v, k) => v + middle[k]), along: r.along }; },
  get state() {
    return { picked: picked < 0 ? null : nameOf(picked), show, shown: order.filter(b => shown[b]).map(nameOf), cut: { ...cut }, cam: { ...cam }, dist: eye.dist,
      faces: (buffers.faces?.n || 0) / 3, coarse: pace.coarse, view: document.documentElement.dataset.view };
  },
  finish: () => { if (gl) gl.readPixels(0, 0, 1, 1, gl.RGBA, gl.UNSIGNED_BYTE, new Uint8Array(4)); },
};
})();
