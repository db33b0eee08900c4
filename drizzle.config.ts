import { defineConfig } from 'drizzle-kit';

export default defineConfig({
  dialect: 'postgresql',
  schema: './server/db/schema',
  out: './drizzle',
  // Stands here and in the connection: with one alone, queries ask for columns that do not exist.
  casing: 'snake_case',
});
