// Writes the examples of the page: the demo models, with their data in place.
import fs from 'node:fs';
import path from 'node:path';

const folder = path.join(import.meta.dirname, '../../testdata/demo');
const demos = [];
for (const name of ['relay', 'clinics', 'assay-first', 'assay-redo', 'germination']) {
  let text = fs.readFileSync(path.join(folder, name + '.bayes'), 'utf8');
  text = text.replace(/^(table \w+) from "([^"]+)"(.*)$/gm, (_, head, file) => {
    const rows = fs.readFileSync(path.join(folder, file), 'utf8').trim().split(/\r?\n/);
    return head + '\n' + rows.map((row) => '| ' + row.split(',').join(' | ') + ' |').join('\n');
  });
  demos.push({ name, title: /title "([^"]*)"/.exec(text)?.[1] ?? name, text });
}
fs.writeFileSync(path.join(import.meta.dirname, 'page/src/demos.json'), JSON.stringify(demos, null, 2) + '\n');
