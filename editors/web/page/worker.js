// Runs the language server (Go, compiled to WebAssembly) beside the page.
importScripts('wasm_exec.js');

const waiting = [];
let ready = false;

self.wellposedReceive = (message) => self.postMessage(message);
self.wellposedReady = () => {
  ready = true;
  for (const message of waiting) self.wellposedSend(message);
  waiting.length = 0;
};
self.onmessage = (event) => {
  if (ready) self.wellposedSend(event.data);
  else waiting.push(event.data);
};

async function load() {
  const go = new self.Go();
  const { instance } = await WebAssembly.instantiateStreaming(fetch('wellposed.wasm'), go.importObject);
  await go.run(instance);
}

load().catch((problem) => self.postMessage(JSON.stringify({ failed: String(problem) })));
