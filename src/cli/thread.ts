/** The program of a worker thread. */
import { load } from './load.js';

await load().workAsThread();
