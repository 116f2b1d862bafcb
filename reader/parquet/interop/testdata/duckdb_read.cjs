// Reads the Parquet files of a folder with DuckDB. Usage: node duckdb_read.cjs
// FOLDER. Beside each NAME.parquet it writes NAME.txt: the cells of the first
// column, then those of the second, each as JSON on a line, doubles as their bits.
// Of each column some values are looked for with a filter, which statistics may
// answer; a count that is not that of the cells ends it with an error.
const fs = require('fs');
const { DuckDBInstance } = require('@duckdb/node-api');

const text = (s) => `'${s.replaceAll("'", "''")}'`;
const bits = new DataView(new ArrayBuffer(8));

function shown(x) {
  if (x === null) return '∅';
  if (typeof x === 'number') {
    bits.setFloat64(0, x);
    return bits.getBigUint64(0).toString(16);
  }
  if (typeof x === 'object') return String(x.days);
  return String(x);
}

function literal(x) {
  if (typeof x === 'number') return `'${Object.is(x, -0) ? '-0' : x}'::double`;
  if (typeof x === 'object') return `date '1970-01-01' + (${x.days})`;
  return typeof x === 'string' ? text(x) : String(x);
}

async function main(dir) {
  const db = await DuckDBInstance.create(':memory:', { threads: '2' });
  const c = await db.connect();
  for (const name of fs.readdirSync(dir).filter((n) => n.endsWith('.parquet')).sort()) {
    const from = `read_parquet(${text(`${dir}/${name}`)})`;
    const all = await c.runAndReadAll(`select * from ${from}`);
    const names = all.columnNames(), columns = all.getColumns();
    const cells = names.map((_, k) => (columns[k] ?? []).map(shown));
    for (let k = 0; k < names.length; k++) {
      const n = cells[k].length;
      for (let i = 0; i < n; i += 1 + (n >> 2)) {
        const x = columns[k][i];
        if (x === null) continue;
        const like = shown(x === 0 ? 0 : x);
        const want = columns[k].filter((y) => shown(y === 0 ? 0 : y) === like).length;
        const [{ found }] = (await c.runAndReadAll(`select count(*)::int found from ${from} where ${names[k]} = ${literal(x)}`)).getRowObjectsJson();
        if (found !== want) throw new Error(`${name}: ${names[k]} = ${literal(x)} is found in ${found} rows, not ${want}`);
      }
    }
    fs.writeFileSync(`${dir}/${name}`.replace(/parquet$/, 'txt'), cells.flat().map((s) => JSON.stringify(s) + '\n').join(''));
  }
}

main(process.argv[2]).catch((e) => { console.error(e); process.exit(1); });
