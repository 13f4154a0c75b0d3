/** Writes the page with the make-believe engine of `worker.js` to the file named on the command line. */
import { build } from 'esbuild';
import { createHash } from 'node:crypto';
import { readFile, writeFile } from 'node:fs/promises';
import { gzipSync } from 'node:zlib';

const www = new URL('../..', import.meta.url);
const read = (path) => readFile(new URL(path, www), 'utf8');
const hash = (text) => `'sha256-${createHash('sha256').update(text).digest('base64')}'`;
const bundled = await build({ absWorkingDir: www.pathname, entryPoints: ['page/main.js'], bundle: true, format: 'iife', write: false });
const main = bundled.outputFiles[0].text.replaceAll('</script', '<\\/script');
const style = (await read('style.css')) + (await read('../src/answer/answer.css').catch(() => ''));
const examples = [{ name: 'teaching', title: 'Practice and recall', text: '[[cell]]\nkind = "note"\n[[cell]]\nkind = "study"\n' }];
const policy = `default-src 'none'; script-src ${hash(main)} 'wasm-unsafe-eval'; worker-src blob:; connect-src 'none'; style-src ${hash(style)}; img-src data: blob:; font-src 'none'; object-src 'none'; frame-src 'none'; form-action 'none'; base-uri 'none'; require-trusted-types-for 'script'; trusted-types app`;
const block = (id, type, text) => `<script type="${type}" id="${id}">${text}</script>`;
const parts = {
  policy: `<meta http-equiv="Content-Security-Policy" content="${policy}"><link rel="icon" href="data:,">`,
  style: `<style>${style}</style>`,
  blocks: [
    block('engine', 'application/octet-stream', gzipSync(Buffer.from([0, 97, 115, 109, 1, 0, 0, 0])).toString('base64')),
    block('worker', 'text/plain', await read('tests/fake/worker.js')),
    block('licences', 'text/plain', 'The licences.'),
    block('examples', 'application/octet-stream', Buffer.from(JSON.stringify(examples)).toString('base64')),
  ].join('\n'),
  script: `<script>${main}</script>`,
};
let html = await read('index.html');
for (const [mark, text] of Object.entries(parts)) html = html.replace(`<!-- pack:${mark} -->`, () => text);
await writeFile(process.argv[2] ?? '../dist/fake.html', html);
