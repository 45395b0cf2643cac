"use strict";
(() => {
  // Turns two scenes together. Every body is drawn through a depth buffer, so crossing members hide each other rightly.
  const colours = () => {
    const style = getComputedStyle(document.documentElement);
    const read = (name) => { const v = style.getPropertyValue(name).trim(); return [1, 3, 5].map((n) => parseInt(v.slice(n, n + 2), 16)); };
    return { paper: read("--paper"), ink: read("--ink"), accent: read("--accent") };
  };
  const blend = (a, b, t) => a.map((v, n) => Math.round(v + (b[n] - v) * t));
  const pack = ([r, g, b]) => (255 << 24) | (b << 16) | (g << 8) | r;

  const extent = (scenes) => {
    const low = [1e9, 1e9, 1e9], high = [-1e9, -1e9, -1e9];
    for (const body of scenes) for (let n = 0; n < body.p.length; n += 1) {
      low[n % 3] = Math.min(low[n % 3], body.p[n]);
      high[n % 3] = Math.max(high[n % 3], body.p[n]);
    }
    const middle = low.map((v, n) => (v + high[n]) / 2);
    return { middle, radius: Math.hypot(...low.map((v, n) => high[n] - v)) / 2 };
  };

  class Picture {
    constructor(canvas, bodies, frame) {
      Object.assign(this, { canvas, bodies, frame });
    }

    draw(yaw, pitch, zoom) {
      const box = this.canvas.getBoundingClientRect();
      const density = Math.min(window.devicePixelRatio || 1, 2);
      const w = Math.max(Math.round(box.width * density), 1), h = Math.max(Math.round(box.height * density), 1);
      if (this.canvas.width !== w || this.canvas.height !== h) { this.canvas.width = w; this.canvas.height = h; }
      const pen = this.canvas.getContext("2d");
      const image = pen.createImageData(w, h);
      const hue = colours();
      this.w = w; this.h = h;
      this.pixels = new Uint32Array(image.data.buffer).fill(pack(hue.paper));
      this.depth = new Float32Array(w * h).fill(-1e9);
      const [ca, sa, cb, sb] = [Math.cos(yaw), Math.sin(yaw), Math.cos(pitch), Math.sin(pitch)];
      const scale = (Math.min(w, h * 1.3) / 2 / this.frame.radius) * zoom;
      const { middle } = this.frame;
      const see = (p, n) => {
        const x = p[n] - middle[0], y = p[n + 1] - middle[1], z = p[n + 2] - middle[2];
        return [w / 2 + (x * ca + y * sa) * scale, h / 2 - ((-x * sa + y * ca) * sb + z * cb) * scale, ((x * sa - y * ca) * cb + z * sb)];
      };
      const tones = new Map();
      const tone = (light, marked) => {
        const key = Math.round(light * 12) * 2 + marked;
        if (!tones.has(key)) tones.set(key, pack(blend(hue.paper, marked ? hue.accent : hue.ink, (marked ? 0.3 : 0.1) + 0.26 * (1 - light))));
        return tones.get(key);
      };
      const ink = pack(blend(hue.paper, hue.ink, 0.9));
      const seen = this.bodies.map((body) => { const out = []; for (let n = 0; n < body.p.length; n += 3) out.push(see(body.p, n)); return out; });
      this.bodies.forEach((body, n) => body.f.forEach((face) => {
        const ring = face.map((i) => seen[n][i]);
        const light = this.light(ring, scale);
        for (let i = 2; i < ring.length; i += 1) this.triangle(ring[0], ring[i - 1], ring[i], tone(light, body.m));
      }));
      this.bodies.forEach((body, n) => body.e.forEach(([a, b]) => this.line(seen[n][a], seen[n][b], ink, 0.06)));
      pen.putImageData(image, 0, 0);
    }

    light([a, b, c], scale) {
      const u = [b[0] - a[0], b[1] - a[1], (b[2] - a[2]) * scale], v = [c[0] - a[0], c[1] - a[1], (c[2] - a[2]) * scale];
      const n = [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]];
      return Math.abs(n[2]) / (Math.hypot(...n) || 1);
    }

    triangle(a, b, c, colour) {
      const { w, h, depth, pixels } = this;
      const area = (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]);
      if (Math.abs(area) < 1e-6) return;
      const x0 = Math.max(Math.floor(Math.min(a[0], b[0], c[0])), 0), x1 = Math.min(Math.ceil(Math.max(a[0], b[0], c[0])), w - 1);
      const y0 = Math.max(Math.floor(Math.min(a[1], b[1], c[1])), 0), y1 = Math.min(Math.ceil(Math.max(a[1], b[1], c[1])), h - 1);
      for (let y = y0; y <= y1; y += 1) for (let x = x0; x <= x1; x += 1) {
        const px = x + 0.5, py = y + 0.5;
        const s = ((px - a[0]) * (c[1] - a[1]) - (py - a[1]) * (c[0] - a[0])) / area;
        const t = ((b[0] - a[0]) * (py - a[1]) - (b[1] - a[1]) * (px - a[0])) / area;
        if (s < 0 || t < 0 || s + t > 1) continue;
        const z = a[2] + s * (b[2] - a[2]) + t * (c[2] - a[2]);
        const at = y * w + x;
        if (z > depth[at]) { depth[at] = z; pixels[at] = colour; }
      }
    }

    line(a, b, colour, lift) {
      const { w, h, depth, pixels } = this;
      const steps = Math.ceil(Math.max(Math.abs(b[0] - a[0]), Math.abs(b[1] - a[1]), 1));
      for (let n = 0; n <= steps; n += 1) {
        const t = n / steps;
        const x = Math.floor(a[0] + t * (b[0] - a[0])), y = Math.floor(a[1] + t * (b[1] - a[1]));
        if (x < 0 || y < 0 || x >= w || y >= h) continue;
        const at = y * w + x;
        if (a[2] + t * (b[2] - a[2]) + lift >= depth[at]) pixels[at] = colour;
      }
    }
  }

  document.querySelectorAll("figure.spatial").forEach((figure) => {
    const data = JSON.parse(figure.querySelector(".scene").textContent);
    const bodies = (name) => data[name].map((body) => ({ ...body, ...data.builds[body.b] }));
    const frame = extent([...data.real, ...data.implied]);
    const start = { yaw: (data.yaw * Math.PI) / 180, pitch: (data.pitch * Math.PI) / 180, zoom: 1 };
    const view = { ...start };
    const pictures = [...figure.querySelectorAll("canvas")].map((canvas) => {
      canvas.parentElement.querySelector("img").classList.add("paper-only");
      canvas.hidden = false;
      return new Picture(canvas, bodies(canvas.dataset.scene), frame);
    });
    let waiting = false;
    const draw = () => {
      if (waiting) return;
      waiting = true;
      requestAnimationFrame(() => { waiting = false; pictures.forEach((picture) => picture.draw(view.yaw, view.pitch, view.zoom)); figure.dataset.yaw = view.yaw.toFixed(3); });
    };
    const turn = (yaw, pitch) => {
      view.yaw += yaw;
      view.pitch = Math.min(Math.max(view.pitch + pitch, -0.2), Math.PI / 2);
      draw();
    };
    const steps = { left: [-0.12, 0], right: [0.12, 0], up: [0, 0.1], down: [0, -0.1] };
    figure.querySelector(".controls").addEventListener("click", (event) => {
      const how = event.target.dataset.turn;
      if (how === "reset") { Object.assign(view, start); draw(); }
      if (steps[how]) turn(...steps[how]);
    });
    pictures.forEach(({ canvas }) => {
      let from = null;
      canvas.addEventListener("keydown", (event) => {
        const how = event.key.startsWith("Arrow") ? event.key.slice(5).toLowerCase() : "";
        if (steps[how]) { event.preventDefault(); turn(...steps[how]); }
      });
      canvas.addEventListener("pointerdown", (event) => { from = [event.clientX, event.clientY]; canvas.setPointerCapture(event.pointerId); });
      canvas.addEventListener("pointermove", (event) => {
        if (!from) return;
        turn((event.clientX - from[0]) * -0.008, (event.clientY - from[1]) * 0.008);
        from = [event.clientX, event.clientY];
      });
      canvas.addEventListener("pointerup", () => { from = null; });
      canvas.addEventListener("pointercancel", () => { from = null; });
    });
    new IntersectionObserver((seen) => { if (seen.some((one) => one.isIntersecting)) draw(); }).observe(figure);
    window.addEventListener("resize", draw);
    window.matchMedia("(prefers-color-scheme: dark)").addEventListener("change", draw);
  });
})();
