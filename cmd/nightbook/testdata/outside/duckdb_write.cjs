// Writes a position file as Parquet with DuckDB, in every way that DuckDB has.
// Usage: node duckdb_write.cjs POSITIONS.csv FOLDER. Each variant is a file
// FOLDER/NAME.parquet, or a folder of that name with part files.
const { DuckDBInstance } = require('@duckdb/node-api');

const text = (s) => `'${s.replaceAll("'", "''")}'`;

async function main(csv, dir) {
  const db = await DuckDBInstance.create(':memory:', { threads: '1' });
  const c = await db.connect();
  await c.run(`set preserve_insertion_order = true`);
  await c.run(`create table raw as select row_number() over () n, * from read_csv(${text(csv)}, header = true, all_varchar = true, nullstr = '')`);
  const numbers = ['quantity', 'multiplier', 'strike', 'vol', 'mark', 'payout', 'barrier', 'rebate', 'average_so_far', 'entry_price'];
  const dates = ['average_start'];
  const columns = (await (await c.runAndReadAll(`describe raw`)).getRowObjectsJson()).map((d) => d.column_name).filter((n) => n !== 'n');
  // types: what each kind of column is cast to
  const typed = (types) => columns.map((n) => {
    const to = n === 'expiry' ? types.expiry : dates.includes(n) ? 'DATE' : numbers.includes(n) ? (types[n] ?? 'DOUBLE') : types.text ?? 'VARCHAR';
    return `cast(${n} as ${to}) as ${n}`;
  }).join(', ');
  const write = async (name, types, options) => c.run(`copy (select ${typed(types)} from raw order by n) to ${text(`${dir}/${name}`)} (format parquet, ${options})`);
  for (const codec of ['uncompressed', 'snappy', 'gzip', 'zstd', 'lz4_raw', 'brotli'])
    for (const version of ['v1', 'v2'])
      await write(`${codec}_${version}.parquet`, { expiry: 'TIMESTAMP' }, `compression ${codec}, parquet_version ${version}, row_group_size 2048`);
  for (const unit of ['TIMESTAMP_S', 'TIMESTAMP_MS', 'TIMESTAMP_NS'])
    await write(`${unit}.parquet`, { expiry: unit }, `compression zstd`);
  await write('decimals.parquet', { expiry: 'TIMESTAMP', quantity: 'DECIMAL(9,0)', multiplier: 'INTEGER', strike: 'DECIMAL(18,6)', mark: 'DECIMAL(38,12)', entry_price: 'DECIMAL(4,0)' }, `compression snappy, parquet_version v2`);
  await write('dictionaries.parquet', { expiry: 'TIMESTAMP' }, `dictionary_size_limit 1000000, row_group_size 100000`);
  await write('no_dictionaries.parquet', { expiry: 'TIMESTAMP' }, `dictionary_size_limit 0, parquet_version v2`);
  await write('zoned.parquet', { expiry: 'TIMESTAMPTZ' }, `compression zstd`);
  await c.run(`copy (select ${typed({ expiry: 'TIMESTAMP' })} from raw order by n) to ${text(`${dir}/parts`)} (format parquet, partition_by (book), filename_pattern 'part-{i}')`);
}

main(process.argv[2], process.argv[3]).catch((e) => { console.error(e); process.exit(1); });
