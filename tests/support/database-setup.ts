import { claimDatabase } from './database.js';

// Before the file's own modules load, so that useTestDatabase() needs no waiting.
await claimDatabase();
