// The single pass that an analytical SQL engine makes over a text file: split into lower-case words
// at blanks, count words and adjacent pairs within a line, PMI of the pairs that occur 8 times or
// more.
//
//   node duckdb_pairs.mjs FILE THREADS
//
// Nothing is merged, written or explained. Splitting at blanks is the quickest way there is;
// splitting at whatever is no letter or digit, as a word rule would, takes about a sixth longer.
import { createRequire } from 'node:module';
import { pathToFileURL } from 'node:url';

const [file, threads] = process.argv.slice(2);
if (file === undefined || threads === undefined) {
  process.stderr.write('usage: node duckdb_pairs.mjs FILE THREADS\n');
  process.exit(2);
}

// The package is looked for from the working directory, where the benchmark installed it.
const require = createRequire(pathToFileURL(`${process.cwd()}/`));
const { DuckDBInstance } = require('@duckdb/node-api');

const instance = await DuckDBInstance.create(':memory:', { threads });
const connection = await instance.connect();
const quoted = file.replaceAll("'", "''");
await connection.run(`
  CREATE TABLE passages AS
  SELECT list_filter(string_split(lower(line), ' '), lambda word: word <> '') AS words
  FROM read_csv('${quoted}', columns = {'line': 'VARCHAR'}, delim = '\x01', quote = '', escape = '',
                header = false, auto_detect = false, max_line_size = 100000000)`);
await connection.run(`
  CREATE TABLE words AS
  SELECT word, count(*) AS n FROM (SELECT unnest(words) AS word FROM passages) GROUP BY word`);
await connection.run(`
  CREATE TABLE pairs AS
  SELECT first, second, count(*) AS n
  FROM (SELECT unnest(words[:-2]) AS first, unnest(words[2:]) AS second FROM passages)
  GROUP BY first, second HAVING count(*) >= 8`);
await connection.run(`
  CREATE TABLE scored AS
  SELECT first, second, pairs.n,
         log2(pairs.n::DOUBLE * (SELECT sum(n) FROM words) / (l.n::DOUBLE * r.n)) AS pmi
  FROM pairs JOIN words l ON l.word = first JOIN words r ON r.word = second
  ORDER BY pmi DESC`);
const answer = await connection.runAndReadAll('SELECT count(*), max(pmi) FROM scored');
const [pairs, best] = answer.getRows()[0];
process.stdout.write(`${pairs} pairs, PMI up to ${best}\n`);
