// Opens pages from disk in a headless browser and judges them: no errors, no
// requests, tables that sort and filter, a viewer that draws and picks, a picture
// where there is no WebGL, and no finding of axe-core or html-validate.
// usage: node judge_page.mjs FRONT.html BALL.html
// FRONT is the page of patches/front_quarter.ron, BALL that of patches/sphere.ron at
// a chord of 0.02 mm, which makes more triangles than the viewer is given.
// Packages stand in JUDGES_MODULES, the browser is CHROMIUM or /usr/bin/chromium,
// screenshots go to the folder SCREENSHOTS, if one is named.
import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { resolve } from "node:path";
import { pathToFileURL } from "node:url";

const modules = process.env.JUDGES_MODULES ?? new URL(".", import.meta.url).pathname;
const require = createRequire(modules + "/");
const { chromium } = require("playwright-core");
const { HtmlValidate, StaticConfigLoader } = require("html-validate");
const axe = readFileSync(require.resolve("axe-core/axe.min.js"), "utf8");
const [front, ball] = process.argv.slice(2).map((file) => resolve(file));
let passed = 0;
const said = (text) => { passed += 1; console.log(`ok: ${text}`); };

const validator = new HtmlValidate(new StaticConfigLoader({ extends: ["html-validate:recommended"] }));
for (const file of [front, ball]) {
  const report = await validator.validateString(readFileSync(file, "utf8"));
  for (const { messages } of report.results) {
    for (const m of messages.slice(0, 10)) console.log(`  ${m.line}:${m.column} ${m.ruleId}: ${m.message}`);
  }
  assert.equal(report.errorCount + report.warningCount, 0, `${file}: html-validate has findings`);
}
said("html-validate has no finding");

const browser = await chromium.launch({
  executablePath: process.env.CHROMIUM ?? "/usr/bin/chromium",
  args: ["--no-sandbox", "--use-gl=angle", "--use-angle=swiftshader", "--enable-unsafe-swiftshader"],
});
const plain = await chromium.launch({
  executablePath: process.env.CHROMIUM ?? "/usr/bin/chromium",
  args: ["--no-sandbox", "--disable-gpu", "--disable-3d-apis"],
});

async function open(file, options = {}, from = browser) {
  const context = await from.newContext({ viewport: { width: 1400, height: 1000 }, ...options });
  const page = await context.newPage();
  const faults = [];
  page.on("console", (message) => { if (["error", "warning"].includes(message.type())) faults.push(message.text()); });
  page.on("pageerror", (error) => faults.push(String(error)));
  page.on("request", (request) => { if (!/^(file|data):/.test(request.url())) faults.push(`request of ${request.url()}`); });
  await page.goto(pathToFileURL(file).href);
  await page.waitForTimeout(300);
  const shot = async (name, full = true) => {
    if (process.env.SCREENSHOTS) await page.screenshot({ path: `${process.env.SCREENSHOTS}/${name}.png`, fullPage: full });
  };
  return { page, faults, shot };
}

async function accessible(page, name) {
  await page.evaluate(axe);
  const { violations } = await page.evaluate(() => window.axe.run(document, { resultTypes: ["violations"] }));
  for (const v of violations) console.log(`  ${v.id}: ${v.help}: ${v.nodes.slice(0, 3).map((n) => n.html.slice(0, 160)).join(" | ")}`);
  assert.equal(violations.length, 0, `axe-core: ${name}`);
  said(`axe-core has no finding: ${name}`);
}

// Pixels of the viewer that are not background, as a share, and their box.
const seen = (page) => page.evaluate(() => {
  const canvas = document.querySelector("#view"), gl = canvas.getContext("webgl2");
  const [w, h] = [canvas.width, canvas.height], bytes = new Uint8Array(4 * w * h);
  gl.readPixels(0, 0, w, h, gl.RGBA, gl.UNSIGNED_BYTE, bytes);
  let count = 0;
  const colours = new Set();
  for (let i = 0; i < w * h; i++) {
    const c = [bytes[4 * i], bytes[4 * i + 1], bytes[4 * i + 2]];
    if (Math.abs(c[0] - 233) + Math.abs(c[1] - 235) + Math.abs(c[2] - 238) > 6) count += 1;
    colours.add(c.join());
  }
  return { count, colours: colours.size, pixel: Number(canvas.dataset.pixel), ratio: w / canvas.clientWidth };
});

{
  const { page, faults, shot } = await open(front);
  await shot("front-light");
  assert.equal(await page.locator("#fallback").isVisible(), false);
  const first = await seen(page);
  assert.ok(first.count > 20000 && first.colours > 200, JSON.stringify(first));
  said("the viewer draws");
  for (const shading of await page.locator("#shading option").evaluateAll((all) => all.map((o) => o.value))) {
    await page.selectOption("#shading", shading);
    await page.waitForTimeout(150);
    const now = await seen(page);
    assert.ok(Math.abs(now.count - first.count) < 0.12 * first.count, `${shading}: ${now.count}`);
    if (process.env.SCREENSHOTS) await page.locator("#viewer").screenshot({ path: `${process.env.SCREENSHOTS}/viewer-${shading}.png` });
  }
  said("every shading draws");
  await page.selectOption("#shading", "plain");

  // The numbers of seams whose worst places are hidden are grey: the bumper's is
  // seen from the front, and behind the wing from the rear.
  const grey = async (from) => {
    await page.selectOption("#from", from);
    await page.waitForTimeout(600);
    return page.locator("#labels span").evaluateAll((all) => all.filter((l) => l.classList.contains("behind")).map((l) => l.textContent));
  };
  assert.ok((await grey("0.62,-0.68,0.39")).includes("1"));
  const seenFromFront = await grey("-0.62,-0.68,0.39");
  assert.ok(!seenFromFront.includes("1") && !seenFromFront.includes("3"), seenFromFront.join());
  await page.uncheck("#with-seams");
  await page.waitForTimeout(150);
  assert.equal(await page.locator("#labels span:visible").count(), 0);
  await page.check("#with-seams");
  said("numbers that are hidden are grey");

  // A seam's button takes the viewer there: its worst place is in the middle.
  await page.locator("button.show[data-seam='1']").click();
  await page.waitForTimeout(200);
  const worst = await page.evaluate(() => JSON.parse(document.querySelector("#data").textContent).seams[0].worst);
  await page.locator("#view").press("Enter");
  const point = await page.locator("#picked").evaluate((e) => e.dataset.point.split(" ").map(Number));
  assert.ok(Math.hypot(...point.map((x, i) => x - worst[i])) < 0.5, `${point} ${worst}`);
  const names = await page.locator("#seams-table tbody tr:has(button[data-seam='1'])").innerText();
  const patch = await page.locator("#picked").evaluate((e) => e.dataset.patch);
  assert.ok(names.includes(patch), `${patch} is not of ${names}`);
  said("a row leads to its seam, and the pick there names its patch");
  await shot("front-seam-1", false);

  // Tables: sorted by gap, downwards, the largest gap is on top.
  const gap = page.locator("#seams-table th").filter({ hasText: "gap" }).locator("button");
  const column = () => page.locator("#seams-table tbody tr td:nth-child(5)").evaluateAll((all) => all.map((c) => Number(c.dataset.value)));
  await gap.click();
  let values = await column();
  assert.ok(values.length > 100 && values.every((v, i) => i === 0 || values[i - 1] <= v));
  await gap.press("Enter");
  values = await column();
  assert.ok(values.every((v, i) => i === 0 || values[i - 1] >= v));
  assert.equal(await page.locator("#seams-table th[aria-sort=descending]").count(), 1);
  said("tables sort both ways, by mouse and by keyboard");
  await page.fill("#words", "sill gap");
  assert.equal(await page.locator("#seams-table tbody tr:visible").count(), 1);
  await page.fill("#words", "");
  await page.selectOption("#verdicts", "fault");
  assert.equal(await page.locator("#seams-table tbody tr:visible").count(), 3);
  said("the filter leaves what it names");
  const broken = await page.locator("img").evaluateAll((all) => all.filter((i) => !i.complete || i.naturalWidth === 0).length);
  assert.equal(broken, 0);
  await accessible(page, "light");
  assert.deepEqual(faults, []);
  said("no error and no request");
}
{
  const { page, faults, shot } = await open(front, { colorScheme: "dark" });
  await accessible(page, "dark");
  await shot("front-dark");
  await page.emulateMedia({ media: "print", colorScheme: "light" });
  assert.equal(await page.locator("#view").isVisible(), false);
  assert.equal(await page.locator("#fallback img").isVisible(), true);
  await shot("front-print");
  assert.deepEqual(faults, []);
  said("on paper a picture stands for the viewer");
}
{
  // A ball: its disc has the area of the formula, and what is picked in the
  // middle has the curvature of the formula.
  const { page, faults } = await open(ball);
  const text = await page.locator("#viewer").innerText();
  const [whole, few] = /The mesh has (\d+) triangles; the viewer has a coarser one of (\d+)/.exec(text).slice(1).map(Number);
  const packed = await page.evaluate(() => atob(JSON.parse(document.querySelector("#data").textContent).proved).length / 4);
  assert.ok(whole > 100000 && few <= 100000 && packed === few, `${whole} ${few} ${packed}`);
  said("above 100,000 triangles the viewer has a coarser mesh, and says so");
  await page.uncheck("#with-seams");
  await page.waitForTimeout(200);
  const now = await seen(page);
  const radius = await page.evaluate(() => {
    const data = JSON.parse(document.querySelector("#data").textContent);
    return (data.high[2] - data.low[2]) / 2;
  });
  const disc = Math.PI * (radius / now.pixel * now.ratio) ** 2;
  assert.ok(Math.abs(now.count / disc - 1) < 0.02, `${now.count} against ${disc}`);
  await page.locator("#view").press("Enter");
  const picked = await page.locator("#picked").evaluate((e) => ({ ...e.dataset }));
  assert.ok(Math.abs(Math.abs(Number(picked.mean)) * radius - 1) < 1e-3, JSON.stringify(picked));
  assert.ok(Math.abs(Number(picked.gaussian) * radius ** 2 - 1) < 1e-3);
  const far = Math.hypot(...picked.point.split(" ").map(Number).map((x, i) => x - [0, 0, 0][i]));
  assert.ok(far > 0);
  assert.deepEqual(faults, []);
  said("a ball has the silhouette and the curvature of its formula");
}
{
  const { page, faults, shot } = await open(ball, {}, plain);
  assert.equal(await page.locator("#view").isVisible(), false);
  assert.equal(await page.locator("#controls").isVisible(), false);
  assert.equal(await page.locator("#fallback img").isVisible(), true);
  await accessible(page, "without WebGL");
  await shot("ball-fallback");
  // The browser itself may say that WebGL is off; nothing else is said.
  assert.deepEqual(faults.filter((f) => !/webgl/i.test(f)), []);
  said("without WebGL a picture stands there");
}
await browser.close();
await plain.close();
console.log(`${passed} passed, 0 failed`);
