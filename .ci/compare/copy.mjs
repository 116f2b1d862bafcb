// Copies a CSV file to Parquet with DuckDB on two threads: node copy.mjs FROM TO
import { createRequire } from 'node:module'

const { DuckDBInstance } = createRequire(process.env.DUCKDB_FROM)('@duckdb/node-api')
const [from, to] = process.argv.slice(2)
const db = await DuckDBInstance.create(':memory:', { threads: '2' })
const connection = await db.connect()
await connection.run(`copy (select * from read_csv('${from}')) to '${to}' (format parquet)`)
