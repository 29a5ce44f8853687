/** Address of a database in the test cluster, which `npm test` starts. */
export function databaseUrl(database: string): string {
  const base = process.env.TEST_DATABASE_URL;
  if (!base)
    throw new Error(
      'TEST_DATABASE_URL is not set. Run the tests with `npm test`, which starts PostgreSQL for them.',
    );
  const url = new URL(base);
  url.pathname = `/${database}`;
  return url.toString();
}
