/**
 * @param {string} url of the database
 * @returns {Promise<Set<string>>} the addresses of everybody in it, in lower case
 */
export async function readPeople(url) {
  // Imported late: this file is loaded before the npm packages are there.
  const { createConnection } = await import("mysql2/promise");
  const connection = await createConnection(url);
  try {
    const [rows] = await connection.query("SELECT email FROM people");
    return new Set(/** @type {{ email: string }[]} */ (rows).map(({ email }) => email.toLowerCase()));
  } finally {
    await connection.end();
  }
}
