import { serveJob } from './serve-job';

serveJob();
