// JupyterLab's own client library against the kernel behind a real server.
//
// usage: node services.mjs URL TOKEN
//
// URL is that of a jupyter-server in whose kernel specs levelsum is; the
// packages @jupyterlab/services and ws must be where node finds them from the
// working folder. It is not part of the gate, which needs no node.
//
//	npm install @jupyterlab/services ws
//	python -m jupyter_server --no-browser --port 8899 --IdentityProvider.token=x
//	node services.mjs http://127.0.0.1:8899/ x

import assert from "node:assert/strict";
import { createRequire } from "node:module";

const require = createRequire(process.cwd() + "/");
globalThis.document ??= undefined;
const { KernelManager, ServerConnection } = require("@jupyterlab/services");
const WebSocket = require("ws");

const [baseUrl, token] = process.argv.slice(2);
const settings = ServerConnection.makeSettings({
  baseUrl, token, appendToken: true, wsUrl: baseUrl.replace(/^http/, "ws"), WebSocket, fetch, Request, Headers,
});
const manager = new KernelManager({ serverSettings: settings });
const kernel = await manager.startNew({ name: "levelsum" });

// run runs a cell and gathers what came of it.
async function run(connection, code, { answer, started, stop = true } = {}) {
  const got = { stdout: "", stderr: "", shown: [], error: "", types: [] };
  const future = connection.requestExecute({ code, allow_stdin: !!answer, stop_on_error: stop });
  future.onIOPub = (m) => {
    got.types.push(m.header.msg_type);
    if (m.header.msg_type === "stream") got[m.content.name] += m.content.text;
    if (m.content.data) got.shown.push(m.content.data["text/plain"]);
    if (m.header.msg_type === "error") got.error = m.content.ename + ": " + m.content.evalue;
    if (started && got.stdout) { started(); started = undefined; }
  };
  future.onStdin = (m) => connection.sendInputReply({ value: answer(m.content.prompt), status: "ok" }, m.header);
  got.reply = (await future.done).content;
  return got;
}

// event returns a promise and what keeps it.
function event() {
  const e = {};
  e.promise = new Promise((resolve) => { e.resolve = resolve; });
  return e;
}

let n = 0;
async function check(what, f) {
  const t = performance.now();
  await f();
  n++;
  console.log(`ok ${what} (${(performance.now() - t).toFixed(0)} ms)`);
}

await check("kernel_info", async () => {
  const info = await kernel.info;
  assert.equal(info.implementation, "levelsum");
  assert.equal(info.language_info.name, "go");
});
await check("a value", async () => {
  const r = await run(kernel, "x := 41\nx + 1");
  assert.deepEqual(r.shown, ["42"]);
  assert.equal(r.reply.status, "ok");
});
await check("output in order", async () => {
  const r = await run(kernel, 'fmt.Println("a")\ndisplay.Show("b")\nfmt.Println("c")');
  assert.equal(r.stdout, "a\nc\n");
  assert.deepEqual(r.types.filter((t) => t !== "status" && t !== "execute_input"), ["stream", "display_data", "stream"]);
});
await check("completion", async () => {
  const r = await kernel.requestComplete({ code: "strings.HasPr", cursor_pos: 13 });
  assert.ok(r.content.matches.includes("HasPrefix"), r.content.matches);
});
await check("inspection", async () => {
  const r = await kernel.requestInspect({ code: "math.Sqrt", cursor_pos: 9, detail_level: 0 });
  assert.ok(r.content.found);
});
await check("is it complete", async () => {
  const r = await kernel.requestIsComplete({ code: "func f() int {" });
  assert.equal(r.content.status, "incomplete");
});
await check("history", async () => {
  const r = await kernel.requestHistory({ hist_access_type: "tail", n: 3, output: false, raw: true });
  assert.ok(r.content.history.length >= 1);
});
await check("input", async () => {
  const r = await run(kernel, "var T float64\nfmt.Scan(&T)\nT * 2", { answer: () => "150.5" });
  assert.deepEqual(r.shown, ["301"]);
});
await check("no input", async () => {
  const r = await run(kernel, "var T float64\nfmt.Scan(&T)");
  assert.match(r.error, /takes no input/);
});
await check("an error aborts what is queued", async () => {
  const all = await Promise.all([run(kernel, 'panic("as wanted")'), run(kernel, "1"), run(kernel, "2")]);
  assert.deepEqual(all.map((r) => r.reply.status), ["error", "aborted", "aborted"]);
});
const second = new KernelManager({ serverSettings: settings }).connectTo({ model: kernel.model });
await check("a second connection to the same kernel", async () => {
  await second.info;
  const seen = [];
  second.anyMessage.connect((_, a) => { if (a.direction === "recv") seen.push(a.msg.header.msg_type); });
  const r = await run(kernel, 'y := "shared"\nfmt.Println(y)');
  assert.equal(r.stdout, "shared\n");
  assert.deepEqual((await run(second, "y")).shown, ["shared"]);
  assert.ok(seen.includes("execute_input") && seen.includes("stream"), seen);
});
await check("interrupt", async () => {
  const started = event();
  const cell = run(kernel, 'fmt.Println("go")\nfor {}', { started: started.resolve });
  await started.promise;
  await kernel.interrupt();
  assert.match((await cell).error, /^interrupted/);
  assert.deepEqual((await run(second, "x")).shown, ["41"]);
});
await check("interrupt while input is awaited", async () => {
  const asked = event();
  const future = kernel.requestExecute({ code: "var s string\nfmt.Scan(&s)", allow_stdin: true });
  future.onStdin = () => asked.resolve();
  await asked.promise;
  await kernel.interrupt();
  assert.equal((await future.done).content.ename, "interrupted");
});
await check("a killed engine is no dead kernel", async () => {
  const r = await run(kernel, "time.AfterFunc(time.Millisecond, func() { panic(\"late\") })\nselect {}");
  assert.match(r.error, /^engine ended/);
  assert.notEqual(kernel.status, "dead");
  await run(second, "kernel.Replay()");
  assert.deepEqual((await run(kernel, "x + 1")).shown, ["42"]);
});
await check("10 MB of output", async () => {
  const r = await run(kernel, 'for i := range 100_000 { fmt.Println(i, strings.Repeat("x", 100)) }');
  assert.equal(r.reply.status, "ok");
  assert.match(r.stdout, /^0 x/);
  assert.match(r.stdout, /99999 x+\n$/);
  assert.match(r.stderr, /lines .* are left out/);
  assert.doesNotMatch(r.stderr, /IOPub/);
});
await check("restart", async () => {
  await kernel.restart();
  await kernel.info;
  assert.match((await run(kernel, "x")).error, /undefined: x/);
});
await check("shutdown", async () => {
  await kernel.shutdown();
  assert.equal(kernel.status, "dead");
});
console.log(`${n} passed, 0 failed`);
process.exit(0);
