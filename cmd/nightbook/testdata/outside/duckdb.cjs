// Reads the result tables of a run with DuckDB and compares Parquet with CSV,
// cell by cell. Usage: node duckdb.cjs RUN_FOLDER; the folder holds each table
// in both formats. Prints one JSON object.
const { DuckDBInstance } = require('@duckdb/node-api');

const text = (s) => `'${s.replaceAll("'", "''")}'`;

async function main(dir) {
  const db = await DuckDBInstance.create(':memory:');
  const c = await db.connect();
  const rows = async (q) => (await c.runAndReadAll(q)).getRowObjectsJson();
  const out = {};
  for (const table of ['lines', 'books', 'underlyings', 'currencies']) {
    const parquet = `read_parquet(${text(`${dir}/${table}.parquet`)})`;
    const described = await rows(`describe select * from ${parquet}`);
    const types = described.map((d) => `${text(d.column_name)}: ${text(d.column_type)}`).join(', ');
    const csv = `read_csv(${text(`${dir}/${table}.csv`)}, header = true, delim = ',', quote = '"', escape = '"', nullstr = '', allow_quoted_nulls = false, columns = {${types}}, max_line_size = 4000000)`;
    const [{ n }] = await rows(`select count(*)::int n from ${parquet}`);
    const [{ n: differing }] = await rows(`select count(*)::int n from ((select * from ${parquet} except all select * from ${csv}) union all (select * from ${csv} except all select * from ${parquet}))`);
    out[table] = { rows: n, differing, columns: described.map((d) => `${d.column_name} ${d.column_type}`) };
  }
  const lines = `read_parquet(${text(`${dir}/lines.parquet`)})`;
  const [sums] = await rows(`select fsum(value_base)::varchar v, fsum(quantity)::varchar q from ${lines}`);
  out.sums = sums;
  // a filter that row-group statistics can answer must agree with a scan that they cannot
  const [pruned] = await rows(`select (select count(*) from ${lines} where strike > 100)::int a, (select count(*) from ${lines} where strike + 0 > 100)::int b,
    (select count(*) from ${lines} where expiry >= date '2027-01-01')::int c, (select count(*) from ${lines} where expiry + 0 >= date '2027-01-01')::int d,
    (select count(*) from ${lines} where book = (select max(book) from ${lines}))::int e, (select count(*) from ${lines} where book || '' = (select max(book) from ${lines}))::int f`);
  out.pruned = pruned;
  const meta = await rows(`select decode(key) k, decode(value) v from parquet_kv_metadata(${text(`${dir}/lines.parquet`)})`);
  out.metadata = Object.fromEntries(meta.map((m) => [m.k, m.v]));
  console.log(JSON.stringify(out));
}

main(process.argv[2]).catch((e) => { console.error(e); process.exit(1); });
