// The viewer: a mesh in WebGL2, parallel projection. Axes are those of the set,
// z up. Without WebGL2 the picture stays where it is.
{
  const data = JSON.parse(document.querySelector("#data").textContent);
  const canvas = document.querySelector("#view");
  const gl = canvas.getContext("webgl2", { antialias: true, preserveDrawingBuffer: true });
  if (gl) start(data, canvas, gl);
}

function start(data, canvas, gl) {
  const find = (id) => document.getElementById(id);
  const bytes = (text) => Uint8Array.from(atob(text), (c) => c.charCodeAt(0));
  const words = (text) => new Uint16Array(bytes(text).buffer);
  const singles = (text) => new Float32Array(bytes(text).buffer);
  const add = (a, b, s = 1) => [a[0] + b[0] * s, a[1] + b[1] * s, a[2] + b[2] * s];
  const dot = (a, b) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
  const cross = (a, b) => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
  const unit = (a) => { const l = Math.hypot(...a) || 1; return a.map((x) => x / l); };

  // Unpack: one triangle after another, panel by panel.
  const places = words(data.places), normals = words(data.normals), uv = words(data.uv);
  const bends = singles(data.bends), proved = singles(data.proved);
  const corners = new Uint32Array(bytes(data.corners).buffer);
  const size = add(data.high, data.low, -1);
  const middle = data.low.map((x, i) => x + size[i] / 2);
  const radius = Math.max(Math.hypot(...size) / 2, 1e-9);
  const count = proved.length;
  const position = new Float32Array(count * 9), normal = new Float32Array(count * 9);
  const bend = new Float32Array(count * 6), bound = new Float32Array(count * 3);
  const partOf = new Uint32Array(count), cornerOf = new Uint32Array(count * 3);
  const panels = data.panels.map((panel) => ({ ...panel, first: 0, count: 0, visible: true }));
  let before = 0;
  for (const part of data.parts) { part.start = before; before += part.triangles; }
  let at = 0;
  panels.forEach((panel, index) => {
    panel.first = at;
    data.parts.forEach((part, number) => {
      if (part.panel !== index) return;
      for (let t = part.start; t < part.start + part.triangles; t++, at++) {
        partOf[at] = number;
        for (let k = 0; k < 3; k++) {
          const v = corners[3 * t + k], to = 3 * at + k;
          cornerOf[to] = v;
          // From the middle of the box, so that single precision is enough.
          for (let i = 0; i < 3; i++) position[3 * to + i] = (places[3 * v + i] / 65535 - 0.5) * size[i];
          let x = normals[2 * v] / 65535 * 2 - 1, y = normals[2 * v + 1] / 65535 * 2 - 1;
          const z = 1 - Math.abs(x) - Math.abs(y);
          if (z < 0) [x, y] = [(1 - Math.abs(y)) * (x < 0 ? -1 : 1), (1 - Math.abs(x)) * (y < 0 ? -1 : 1)];
          normal.set(unit([x, y, z]), 3 * to);
          bend[2 * to] = bends[2 * v];
          bend[2 * to + 1] = bends[2 * v + 1];
          bound[to] = proved[t];
        }
      }
    });
    panel.count = at - panel.first;
  });

  // Scales of figures: those of the pictures.
  const roundUp = (x) => {
    if (!(x > 0)) return 1;
    const power = 10 ** Math.floor(Math.log10(x));
    return power * [1, 2, 4, 5, 10].find((m) => m * power >= x * (1 - 1e-9));
  };
  const symmetric = (x) => [-x, x];
  const scales = {
    gaussian: [...symmetric(data.ranges[0]), `1/${data.unit}\u00b2`],
    mean: [...symmetric(data.ranges[1]), `1/${data.unit}`],
    principal: [...symmetric(data.ranges[2]), `1/${data.unit}`],
    deviation: [0, roundUp(proved.reduce((a, b) => Math.max(a, b), 0)), data.unit],
  };

  const program = (vertex, fragment) => {
    const made = gl.createProgram();
    for (const [kind, text] of [[gl.VERTEX_SHADER, vertex], [gl.FRAGMENT_SHADER, fragment]]) {
      const shader = gl.createShader(kind);
      gl.shaderSource(shader, "#version 300 es\nprecision highp float;\n" + text);
      gl.compileShader(shader);
      gl.attachShader(made, shader);
    }
    gl.linkProgram(made);
    if (!gl.getProgramParameter(made, gl.LINK_STATUS)) throw new Error("viewer: a shader does not link");
    return made;
  };
  const projection = `
    uniform vec3 right, up, toward, centre; uniform vec2 half_size; uniform float depth;
    vec4 project(vec3 p) {
      vec3 d = p - centre;
      return vec4(dot(d, right) / half_size.x, dot(d, up) / half_size.y, -dot(d, toward) / depth, 1.0);
    }`;
  const surface = program(`${projection}
    in vec3 position, normal; in vec2 bend; in float bound;
    out vec3 p, n, weight; out vec2 k; out float b;
    void main() {
      p = position; n = normal; k = bend; b = bound;
      int corner = gl_VertexID % 3;
      weight = vec3(corner == 0, corner == 1, corner == 2);
      gl_Position = project(position);
    }`, `
    in vec3 p, n, weight; in vec2 k; in float b; out vec4 result;
    uniform vec3 right, up, toward, material; uniform int mode; uniform vec2 range;
    uniform float drum; uniform bool edges; uniform sampler2D ramp;
    vec3 to_srgb(vec3 c) { return mix(12.92 * c, 1.055 * pow(max(c, 0.0), vec3(1.0 / 2.4)) - 0.055, step(0.0031308, c)); }
    vec3 to_linear(vec3 c) { return mix(c / 12.92, pow((c + 0.055) / 1.055, vec3(2.4)), step(0.04045, c)); }
    vec3 lit(vec3 colour, vec3 n) {
      float facing = dot(n, toward);
      if (facing < -0.02) { n = -n; colour = mix(colour, to_linear(vec3(148.0, 122.0, 104.0) / 255.0), 0.8); }
      vec3 lamp = normalize(0.7 * toward + 0.6 * up - 0.45 * right);
      float light = 0.20 + 0.34 * (0.5 + 0.5 * dot(n, up)) + 0.58 * max(dot(n, lamp), 0.0);
      return colour * light + 0.16 * pow(max(dot(n, normalize(lamp + toward)), 0.0), 24.0);
    }
    float lit_up_to(float x) { return 0.5 * floor(x) + min(fract(x), 0.5); }
    float tubes(vec3 n) {
      vec3 r = 2.0 * dot(n, toward) * n - toward;
      vec2 ray = vec2(dot(r, up), dot(r, toward)), from = vec2(dot(p, up), dot(p, toward));
      float square = max(dot(ray, ray), 1e-9), along = dot(from, ray);
      float t = (-along + sqrt(max(along * along + square * (drum * drum - dot(from, from)), 0.0))) / square;
      vec2 hit = from + t * ray;
      float turn = 48.0 * atan(hit.x, hit.y) / 6.283185307;
      float width = max(min(fwidth(turn), fwidth(mod(turn + 24.0, 48.0))), 1e-4);
      return clamp((lit_up_to(turn + width / 2.0) - lit_up_to(turn - width / 2.0)) / width, 0.0, 1.0);
    }
    void main() {
      vec3 unit = normalize(n);
      vec3 colour;
      if (mode <= 1) colour = to_srgb(lit(to_linear(material), unit));
      else if (mode == 2) {
        colour = to_srgb(mix(to_linear(vec3(36.0, 44.0, 54.0) / 255.0), to_linear(vec3(246.0, 247.0, 244.0) / 255.0), tubes(unit)));
      } else {
        float root = sqrt(max(k.y * k.y - k.x, 0.0));
        float figure = mode == 3 ? k.x : mode == 4 ? k.y : mode == 5 ? (k.y < 0.0 ? k.y - root : k.y + root) : b;
        float t = clamp((figure - range.x) / (range.y - range.x), 0.0, 1.0);
        colour = texture(ramp, vec2((t * 255.0 + 0.5) / 256.0, mode == 6 ? 0.25 : 0.75)).rgb;
      }
      if (edges) {
        vec3 near = weight / max(fwidth(weight), vec3(1e-6));
        float line = 1.0 - clamp(min(near.x, min(near.y, near.z)) - 0.1, 0.0, 1.0);
        colour = mix(colour, vec3(0.11, 0.12, 0.13), 0.7 * line);
      }
      result = vec4(colour, 1.0);
    }`);
  const strokes = program(`${projection}
    in vec3 position, colour; out vec3 c; uniform vec2 shift; uniform float lift;
    void main() { c = colour; gl_Position = project(position + toward * lift); gl_Position.xy += shift; }`,
    "in vec3 c; out vec4 result; void main() { result = vec4(c, 1.0); }");

  const attributes = (made, list) => {
    const array = gl.createVertexArray();
    gl.bindVertexArray(array);
    for (const [name, width, values] of list) {
      const place = gl.getAttribLocation(made, name);
      if (place < 0) continue;
      gl.bindBuffer(gl.ARRAY_BUFFER, gl.createBuffer());
      gl.bufferData(gl.ARRAY_BUFFER, values, gl.STATIC_DRAW);
      gl.enableVertexAttribArray(place);
      gl.vertexAttribPointer(place, width, gl.FLOAT, false, 0, 0);
    }
    return array;
  };
  const sheet = attributes(surface, [["position", 3, position], ["normal", 3, normal], ["bend", 2, bend], ["bound", 1, bound]]);
  const segments = (seams) => {
    const points = [], colours = [];
    for (const seam of seams) {
      const colour = seam.colour.map((c) => c / 255);
      for (const line of seam.lines) {
        for (let i = 0; i + 5 < line.length; i += 3) {
          for (const j of [i, i + 3]) points.push(...add(line.slice(j, j + 3), middle, -1));
          colours.push(...colour, ...colour);
        }
      }
    }
    const array = attributes(strokes, [["position", 3, new Float32Array(points)], ["colour", 3, new Float32Array(colours)]]);
    return { array, count: points.length / 3 };
  };
  const bad = data.seams.filter((seam) => !seam.met);
  const quiet = segments(data.seams.filter((seam) => seam.met)), loud = segments(bad);
  const ramps = gl.createTexture();
  gl.bindTexture(gl.TEXTURE_2D, ramps);
  const rampBytes = data.ramps.map(bytes);
  gl.pixelStorei(gl.UNPACK_ALIGNMENT, 1);
  gl.texImage2D(gl.TEXTURE_2D, 0, gl.RGB8, 256, 2, 0, gl.RGB, gl.UNSIGNED_BYTE, new Uint8Array([...rampBytes[0], ...rampBytes[1]]));
  gl.texParameteri(gl.TEXTURE_2D, gl.TEXTURE_MIN_FILTER, gl.LINEAR);
  gl.texParameteri(gl.TEXTURE_2D, gl.TEXTURE_MAG_FILTER, gl.LINEAR);
  gl.texParameteri(gl.TEXTURE_2D, gl.TEXTURE_WRAP_T, gl.CLAMP_TO_EDGE);

  // The eye: an azimuth, an elevation, what stands in the middle, a pixel's length.
  const eye = { azimuth: 0, elevation: 0, centre: [0, 0, 0], pixel: 1 };
  const axes = () => {
    const [c, s, ce, se] = [Math.cos(eye.azimuth), Math.sin(eye.azimuth), Math.cos(eye.elevation), Math.sin(eye.elevation)];
    const toward = [ce * c, ce * s, se], right = [-s, c, 0];
    return { toward, right, up: cross(toward, right) };
  };
  const lookFrom = (d) => {
    const flat = Math.hypot(d[0], d[1]);
    eye.azimuth = flat < 1e-6 * Math.abs(d[2]) ? -Math.PI / 2 : Math.atan2(d[1], d[0]);
    eye.elevation = Math.atan2(d[2], flat);
  };
  const box = () => [canvas.clientWidth || 1, canvas.clientHeight || 1];
  const showAll = () => {
    const { right, up } = axes(), [width, height] = box();
    const range = [right, up].map((axis) => {
      let low = Infinity, high = -Infinity;
      for (const panel of panels.filter((p) => p.visible)) {
        for (let v = 3 * panel.first; v < 3 * (panel.first + panel.count); v++) {
          const d = axis[0] * position[3 * v] + axis[1] * position[3 * v + 1] + axis[2] * position[3 * v + 2];
          if (d < low) low = d;
          if (d > high) high = d;
        }
      }
      return low < high ? [low, high] : [-radius, radius];
    });
    eye.centre = add(right.map((x) => x * (range[0][0] + range[0][1]) / 2), up, (range[1][0] + range[1][1]) / 2);
    eye.pixel = 1.08 * Math.max((range[0][1] - range[0][0]) / width, (range[1][1] - range[1][0]) / height, 1e-9 * radius);
  };
  const lookAt = (seam) => {
    if (seam.normal) lookFrom(seam.normal);
    eye.centre = add(seam.worst, middle, -1);
    eye.pixel = Math.max(1.5 * seam.length, 1e-4 * radius) / box()[0];
  };

  const labels = bad.slice(0, 40).map((seam) => {
    const label = document.createElement("span");
    label.textContent = seam.number;
    label.style.background = `rgb(${seam.colour})`;
    find("labels").append(label);
    return { label, place: add(seam.worst, middle, -1) };
  });
  // The numbers whose places lie behind the surface turn grey; found when the view
  // has come to rest, since all triangles are looked at.
  let resting = 0;
  const judge = () => {
    const { right, up, toward } = axes(), slack = 3 * eye.pixel + 2 * data.chord;
    const open = labels.filter(({ label }) => !label.hidden)
      .map(({ label, place }) => ({ label, x: dot(place, right), y: dot(place, up), z: dot(place, toward) + slack }));
    for (const spot of open) spot.label.classList.remove("behind");
    for (const panel of panels) {
      if (!panel.visible || open.length === 0) continue;
      for (let t = panel.first; t < panel.first + panel.count; t++) {
        const x = [], y = [], z = [];
        for (let o = 9 * t; o < 9 * t + 9; o += 3) {
          x.push(position[o] * right[0] + position[o + 1] * right[1] + position[o + 2] * right[2]);
          y.push(position[o] * up[0] + position[o + 1] * up[1] + position[o + 2] * up[2]);
          z.push(position[o] * toward[0] + position[o + 1] * toward[1] + position[o + 2] * toward[2]);
        }
        for (const spot of open) {
          if (Math.max(...z) <= spot.z) continue;
          const w = [0, 1, 2].map((k) => (x[(k + 1) % 3] - spot.x) * (y[(k + 2) % 3] - spot.y) - (x[(k + 2) % 3] - spot.x) * (y[(k + 1) % 3] - spot.y));
          const sum = w[0] + w[1] + w[2];
          if (sum === 0 || w.some((a) => a * sum < 0)) continue;
          if (dot(w, z) / sum > spot.z) spot.label.classList.add("behind");
        }
      }
    }
  };

  const modes = ["plain", "panels", "reflection", "gaussian", "mean", "principal", "deviation"];
  let waiting = false;
  const draw = () => {
    waiting = false;
    const [width, height] = box(), ratio = Math.min(window.devicePixelRatio || 1, 2);
    canvas.width = Math.round(width * ratio);
    canvas.height = Math.round(height * ratio);
    canvas.dataset.pixel = eye.pixel;
    gl.viewport(0, 0, canvas.width, canvas.height);
    gl.clearColor(233 / 255, 235 / 255, 238 / 255, 1);
    gl.clear(gl.COLOR_BUFFER_BIT | gl.DEPTH_BUFFER_BIT);
    gl.enable(gl.DEPTH_TEST);
    const view = axes();
    const common = (made) => {
      gl.useProgram(made);
      for (const [name, value] of Object.entries({ ...view, centre: eye.centre })) gl.uniform3fv(gl.getUniformLocation(made, name), value);
      gl.uniform2f(gl.getUniformLocation(made, "half_size"), width * eye.pixel / 2, height * eye.pixel / 2);
      gl.uniform1f(gl.getUniformLocation(made, "depth"), 2 * radius + Math.hypot(...eye.centre));
    };
    const shading = find("shading").value, mode = modes.indexOf(shading), scale = scales[shading];
    common(surface);
    gl.bindVertexArray(sheet);
    gl.uniform1i(gl.getUniformLocation(surface, "mode"), mode);
    gl.uniform1i(gl.getUniformLocation(surface, "edges"), find("with-edges").checked ? 1 : 0);
    gl.uniform1f(gl.getUniformLocation(surface, "drum"), 3 * radius);
    if (scale) gl.uniform2f(gl.getUniformLocation(surface, "range"), scale[0], scale[1]);
    for (const panel of panels) {
      if (!panel.visible || panel.count === 0) continue;
      const material = mode === 1 ? panel.colour : [188, 193, 196];
      gl.uniform3fv(gl.getUniformLocation(surface, "material"), material.map((c) => c / 255));
      gl.drawArrays(gl.TRIANGLES, 3 * panel.first, 3 * panel.count);
    }
    const withSeams = find("with-seams").checked;
    if (withSeams) {
      common(strokes);
      gl.uniform1f(gl.getUniformLocation(strokes, "lift"), 2 * eye.pixel);
      const line = (lines, shifts) => {
        gl.bindVertexArray(lines.array);
        for (const [x, y] of shifts) {
          gl.uniform2f(gl.getUniformLocation(strokes, "shift"), 2 * x / canvas.width, 2 * y / canvas.height);
          if (lines.count) gl.drawArrays(gl.LINES, 0, lines.count);
        }
      };
      line(quiet, [[0, 0]]);
      line(loud, [[0, 0], [1, 0], [-1, 0], [0, 1], [0, -1]]);
    }
    for (const { label, place } of labels) {
      const from = add(place, eye.centre, -1);
      const x = width / 2 + dot(from, view.right) / eye.pixel + 18, y = height / 2 - dot(from, view.up) / eye.pixel - 18;
      label.hidden = !withSeams || x < 0 || y < 0 || x > width || y > height;
      label.style.left = `${x}px`;
      label.style.top = `${y}px`;
    }
    clearTimeout(resting);
    resting = setTimeout(judge, 120);
    find("legend").hidden = !scale;
    if (scale) {
      const figure = (x) => (x === 0 ? "0" : Math.abs(x) < 1e-3 ? x.toExponential() : String(Number(x.toPrecision(4))));
      find("low").textContent = figure(scale[0]);
      find("mid").textContent = figure((scale[0] + scale[1]) / 2);
      find("high").textContent = `${figure(scale[1])} ${scale[2]}`;
      const bar = find("bar").getContext("2d"), colours = rampBytes[shading === "deviation" ? 0 : 1];
      for (let i = 0; i < 256; i++) {
        bar.fillStyle = `rgb(${colours.slice(3 * i, 3 * i + 3)})`;
        bar.fillRect(i, 0, 1, 12);
      }
    }
  };
  const redraw = () => { if (!waiting) { waiting = true; requestAnimationFrame(draw); } };

  // The surface at (u, v) of a patch by de Casteljau's algorithm on its net.
  const evaluate = (net, u, v) => {
    const piece = net.pieces.find((p) => p.u[0] <= u && u <= p.u[1] && p.v[0] <= v && v <= p.v[1]);
    if (!piece) return null;
    const [m, n] = piece.degree;
    const own = (range, t) => (t - range[0]) / (range[1] - range[0]);
    const mix = (a, b, t) => a.map((x, i) => x * (1 - t) + b[i] * t);
    const minus = (a, b, s) => a.map((x, i) => (x - b[i]) * s);
    // Value, first and second derivative of a Bezier curve.
    const jet = (points, t) => {
      const degree = points.length - 1;
      let row = points, last = [points], zero = points[0].map(() => 0);
      while (row.length > 1) {
        row = row.slice(1).map((p, i) => mix(row[i], p, t));
        last.push(row);
      }
      const one = degree >= 1 ? last[degree - 1] : null, two = degree >= 2 ? last[degree - 2] : null;
      return [row[0], one ? minus(one[1], one[0], degree) : zero,
        two ? minus(minus(two[2], two[1], 1), minus(two[1], two[0], 1), degree * (degree - 1)) : zero];
    };
    const rows = [];
    for (let i = 0; i <= m; i++) {
      const row = [];
      for (let j = 0; j <= n; j++) {
        const [x, y, z, w] = piece.net.slice(4 * (i * (n + 1) + j), 4 * (i * (n + 1) + j) + 4);
        row.push([x * w, y * w, z * w, w]);
      }
      rows.push(jet(row, own(piece.v, v)));
    }
    const s = own(piece.u, u);
    const [h, hu, huu] = jet(rows.map((r) => r[0]), s), [hv, huv] = jet(rows.map((r) => r[1]), s), [hvv] = jet(rows.map((r) => r[2]), s);
    const w = h[3], div = (a) => a.slice(0, 3).map((x) => x / w);
    const point = div(h);
    const du = add(div(hu), point, -hu[3] / w), dv = add(div(hv), point, -hv[3] / w);
    const duu = add(add(div(huu), du, -2 * hu[3] / w), point, -huu[3] / w);
    const duv = add(add(add(div(huv), du, -hv[3] / w), dv, -hu[3] / w), point, -huv[3] / w);
    const dvv = add(add(div(hvv), dv, -2 * hv[3] / w), point, -hvv[3] / w);
    const normal = unit(cross(du, dv)).map((x) => (net.flipped ? -x : x));
    const [E, F, G] = [dot(du, du), dot(du, dv), dot(dv, dv)], [L, M, N] = [duu, duv, dvv].map((d) => dot(normal, d));
    const area = E * G - F * F;
    return { point, normal, gaussian: (L * N - M * M) / area, mean: (E * N - 2 * F * M + G * L) / (2 * area) };
  };

  const pick = (x, y) => {
    const [width, height] = box(), { right, up, toward } = axes();
    const px = dot(eye.centre, right) + (x - width / 2) * eye.pixel, py = dot(eye.centre, up) - (y - height / 2) * eye.pixel;
    let best = null;
    for (const panel of panels) {
      if (!panel.visible) continue;
      for (let t = panel.first; t < panel.first + panel.count; t++) {
        const o = 9 * t, a = [], b = [], c = [];
        for (let k = 0; k < 3; k++) {
          const p = [position[o + 3 * k], position[o + 3 * k + 1], position[o + 3 * k + 2]];
          a.push(dot(p, right) - px); b.push(dot(p, up) - py); c.push(dot(p, toward));
        }
        const w = [0, 1, 2].map((k) => a[(k + 1) % 3] * b[(k + 2) % 3] - a[(k + 2) % 3] * b[(k + 1) % 3]);
        const sum = w[0] + w[1] + w[2];
        if (sum === 0 || w.some((x) => x * sum < 0)) continue;
        const weight = w.map((x) => x / sum), deep = dot(weight, c);
        if (!best || deep > best.deep) best = { t, weight, deep };
      }
    }
    const out = find("picked");
    delete out.dataset.patch;
    if (!best) { out.textContent = "There is no surface at that place."; return; }
    const part = data.parts[partOf[best.t]], own = [0, 1, 2].map((k) => cornerOf[3 * best.t + k]);
    const along = (values, width, i) => own.reduce((sum, v, k) => sum + best.weight[k] * values[width * v + i], 0);
    const [u, v] = [part.u, part.v].map((r, i) => r[0] + along(uv, 2, i) / 65535 * (r[1] - r[0]));
    const blend = (values, width, i) => [0, 1, 2].reduce((sum, k) => sum + best.weight[k] * values[width * (3 * best.t + k) + i], 0);
    let exact = true, at = data.nets && evaluate(data.nets[part.name], u, v);
    if (!at || !Number.isFinite(at.gaussian)) {
      exact = false;
      at = {
        point: add([0, 1, 2].map((i) => blend(position, 3, i)), middle), normal: unit([0, 1, 2].map((i) => blend(normal, 3, i))),
        gaussian: blend(bend, 2, 0), mean: blend(bend, 2, 1),
      };
    }
    const root = Math.sqrt(Math.max(at.mean ** 2 - at.gaussian, 0));
    const show = (x) => Number(x.toPrecision(6)).toString();
    const list = (a) => a.map(show).join(", ");
    Object.assign(out.dataset, { patch: part.name, u, v, mean: at.mean, gaussian: at.gaussian, point: at.point.join(" ") });
    out.textContent = [
      `patch ${part.name}`, `u ${show(u)}, v ${show(v)}`, `position ${list(at.point)} ${data.unit}`, `normal ${list(at.normal)}`,
      `Gaussian curvature ${show(at.gaussian)} 1/${data.unit}\u00b2`, `mean curvature ${show(at.mean)} 1/${data.unit}`,
      `principal ${show(at.mean - root)} and ${show(at.mean + root)} 1/${data.unit}`,
      `deviation of this triangle ${show(bound[3 * best.t])} ${data.unit}, proved`,
      exact ? "evaluated on the surface" : "interpolated between corners",
    ].join("\n");
  };

  // Hands.
  const turn = (dx, dy) => {
    eye.azimuth -= dx * 0.008;
    eye.elevation = Math.max(-Math.PI / 2, Math.min(Math.PI / 2, eye.elevation + dy * 0.008));
  };
  const move = (dx, dy) => {
    const { right, up } = axes();
    eye.centre = add(add(eye.centre, right, -dx * eye.pixel), up, dy * eye.pixel);
  };
  const grow = (factor, x, y) => {
    const [width, height] = box(), { right, up } = axes();
    const gain = eye.pixel * (1 - factor);
    eye.centre = add(add(eye.centre, right, (x - width / 2) * gain), up, -(y - height / 2) * gain);
    eye.pixel *= factor;
  };
  let held = null;
  canvas.addEventListener("pointerdown", (event) => {
    canvas.setPointerCapture(event.pointerId);
    held = { x: event.offsetX, y: event.offsetY, far: 0 };
  });
  canvas.addEventListener("pointermove", (event) => {
    if (!held) return;
    const [dx, dy] = [event.offsetX - held.x, event.offsetY - held.y];
    held = { x: event.offsetX, y: event.offsetY, far: held.far + Math.abs(dx) + Math.abs(dy) };
    if (event.shiftKey || event.buttons & 2) move(dx, dy); else turn(dx, dy);
    redraw();
  });
  canvas.addEventListener("pointerup", (event) => {
    if (held && held.far < 4 && event.button === 0) pick(event.offsetX, event.offsetY);
    held = null;
  });
  canvas.addEventListener("contextmenu", (event) => event.preventDefault());
  canvas.addEventListener("wheel", (event) => {
    event.preventDefault();
    grow(Math.exp(0.0015 * event.deltaY), event.offsetX, event.offsetY);
    redraw();
  }, { passive: false });
  canvas.addEventListener("keydown", (event) => {
    const [width, height] = box(), step = 24;
    const ways = { ArrowLeft: [-step, 0], ArrowRight: [step, 0], ArrowUp: [0, -step], ArrowDown: [0, step] };
    if (ways[event.key]) (event.shiftKey ? move : turn)(...ways[event.key]);
    else if (event.key === "+" || event.key === "=") grow(0.8, width / 2, height / 2);
    else if (event.key === "-") grow(1.25, width / 2, height / 2);
    else if (event.key === "Home") showAll();
    else if (event.key === "Enter") pick(width / 2, height / 2);
    else return;
    event.preventDefault();
    redraw();
  });
  find("controls").addEventListener("input", redraw);
  find("from").addEventListener("input", (event) => { lookFrom(event.target.value.split(",").map(Number)); showAll(); });
  find("whole").addEventListener("click", () => { showAll(); redraw(); });
  panels.forEach((panel, index) => {
    if (panel.count === 0) return;
    const row = document.createElement("div"), check = document.createElement("input"), label = document.createElement("label");
    row.className = "row";
    check.type = "checkbox";
    check.checked = true;
    check.id = label.htmlFor = `panel-${index}`;
    label.textContent = panel.name;
    check.addEventListener("input", () => { panel.visible = check.checked; });
    row.append(check, label);
    find("visible").append(row);
  });
  document.querySelector("#seams-table").addEventListener("click", (event) => {
    const button = event.target.closest("button.show");
    if (!button) return;
    lookAt(data.seams[Number(button.dataset.seam) - 1]);
    find("viewer").scrollIntoView({ block: "start" });
    canvas.focus({ preventScroll: true });
    redraw();
  });
  find("fallback").hidden = true;
  canvas.hidden = false;
  find("controls").hidden = false;
  lookFrom(find("from").value.split(",").map(Number));
  showAll();
  draw();
  new ResizeObserver(redraw).observe(canvas);
}
