import http from 'node:http'
import pg from 'pg'

/** The other side of the ratio: node:http and pg alone, sending the same SQL and answering its rows. */
interface Asked { sql: string, params: unknown[] }
const { url, queries } = JSON.parse(process.env.DAWNWARD_BENCH_BARE ?? '{}') as { url: string, queries: Asked[] }
const pool = new pg.Pool({ connectionString: url, max: 16 })
const server = http.createServer(async (_request, response) => {
  const answers = await Promise.all(queries.map((query, index) => pool.query({ name: `bench-${index}`, text: query.sql, values: query.params })))
  response.setHeader('content-type', 'application/json')
  response.end(JSON.stringify(answers.map(answer => answer.rows)))
})
server.listen(0, '127.0.0.1', () => process.send?.((server.address() as { port: number }).port))
