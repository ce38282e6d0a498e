import { basicSetup, EditorView } from 'codemirror';
import { keymap } from '@codemirror/view';
import { Compartment } from '@codemirror/state';
import { setDiagnostics, Diagnostic } from '@codemirror/lint';
import {
  LSPClient, LSPPlugin, Transport, formatKeymap, hoverTooltips, renameKeymap, serverCompletion, signatureHelp,
} from '@codemirror/lsp-client';
import { syntaxHighlighting } from '@codemirror/language';
import { classHighlighter } from '@lezer/highlight';
import { bayes } from './language';
import demos from './demos.json';

interface Place { line: number; character: number }
interface Span { start: Place; end: Place }
interface Finding { range: Span; severity?: number; code?: string; message: string }
interface Action { title: string; diagnostics?: Finding[]; edit?: { changes?: Record<string, { range: Span; newText: string }[]> } }

const uri = 'file:///model.bayes';
const severities = ['', 'stop', 'warn', 'note', 'note'];
const state = document.getElementById('state')!;
const list = document.getElementById('findings')!;

/** A transport to the worker that runs the server. */
function connect(): Transport {
  const worker = new Worker('worker.js');
  const handlers = new Set<(message: string) => void>();
  worker.onmessage = (event) => {
    const message: string = event.data;
    if (message.startsWith('{"failed"')) {
      state.textContent = 'The checker could not be started: ' + JSON.parse(message).failed;
      return;
    }
    for (const handler of handlers) handler(message);
  };
  return {
    send: (message) => worker.postMessage(message),
    subscribe: (handler) => handlers.add(handler),
    unsubscribe: (handler) => handlers.delete(handler),
  };
}

function offset(view: EditorView, place: Place): number {
  const doc = view.state.doc;
  if (place.line >= doc.lines) return doc.length;
  const line = doc.line(place.line + 1);
  return Math.min(line.to, line.from + place.character);
}

let view: EditorView;
let latest = 0;

/** Shows the findings in the margin and as a list with their fixes. */
async function show(findings: Finding[], version: number | undefined): Promise<void> {
  const mine = ++latest;
  const marks: Diagnostic[] = findings.map((f) => ({
    from: offset(view, f.range.start), to: offset(view, f.range.end),
    severity: f.severity === 1 ? 'error' : f.severity === 2 ? 'warning' : 'info',
    message: f.message, source: f.code,
  }));
  view.dispatch(setDiagnostics(view.state, marks));
  state.textContent = findings.length === 0 ? 'Nothing to report.' : '';
  const plugin = LSPPlugin.get(view);
  const entries: HTMLElement[] = [];
  for (const f of findings) {
    const entry = document.createElement('li');
    entry.className = severities[f.severity ?? 2];
    const head = document.createElement('button');
    head.className = 'place';
    head.textContent = `${severities[f.severity ?? 2]} · line ${f.range.start.line + 1} · ${f.code}`;
    head.onclick = () => {
      view.dispatch({ selection: { anchor: offset(view, f.range.start), head: offset(view, f.range.end) }, scrollIntoView: true });
      view.focus();
    };
    const text = document.createElement('p');
    text.textContent = f.message;
    entry.append(head, text);
    if (plugin) {
      const actions = await plugin.client.request<object, Action[] | null>('textDocument/codeAction', {
        textDocument: { uri }, range: f.range, context: { diagnostics: [] },
      }).catch(() => null);
      if (mine !== latest) return; // a newer version has arrived
      for (const action of actions ?? []) {
        if (!action.diagnostics?.some((d) => d.code === f.code)) continue;
        const fix = document.createElement('button');
        fix.className = 'fix';
        fix.textContent = action.title;
        fix.onclick = () => apply(action);
        entry.append(fix);
      }
    }
    entries.push(entry);
  }
  if (mine === latest) {
    list.replaceChildren(...entries);
    document.body.dataset.version = String(version ?? '');
    document.body.dataset.findings = String(findings.length);
    if (!document.body.dataset.first) {
      document.body.dataset.first = String(Math.round(performance.now()));
    }
  }
}

function apply(action: Action): void {
  const changes = (action.edit?.changes?.[uri] ?? []).map((c) => ({
    from: offset(view, c.range.start), to: offset(view, c.range.end), insert: c.newText,
  }));
  view.dispatch({ changes });
  view.focus();
}

const client = new LSPClient({
  rootUri: 'file:///',
  notificationHandlers: {
    'textDocument/publishDiagnostics': (_client, params) => {
      void show(params.diagnostics, params.version);
      return true;
    },
  },
}).connect(connect());

const dark = new Compartment();
const theme = (on: boolean) => EditorView.theme({}, { dark: on });
const prefersDark = window.matchMedia('(prefers-color-scheme: dark)');

view = new EditorView({
  doc: demos[0].text,
  extensions: [
    syntaxHighlighting(classHighlighter), basicSetup, bayes, client.plugin(uri, 'bayes'),
    serverCompletion(), hoverTooltips(), signatureHelp(), keymap.of([...formatKeymap, ...renameKeymap]),
    dark.of(theme(prefersDark.matches)),
    EditorView.contentAttributes.of({ 'aria-label': 'Model file' }),
    EditorView.updateListener.of((update) => {
      if (update.docChanged) client.sync();
    }),
  ],
  parent: document.getElementById('editor')!,
});
prefersDark.addEventListener('change', () => view.dispatch({ effects: dark.reconfigure(theme(prefersDark.matches)) }));

const chooser = document.getElementById('demo') as HTMLSelectElement;
for (const demo of demos) chooser.add(new Option(demo.title, demo.name));
chooser.onchange = () => {
  const demo = demos.find((d) => d.name === chooser.value);
  if (demo) view.dispatch({ changes: { from: 0, to: view.state.doc.length, insert: demo.text } });
};
(window as any).wellposedView = view;
