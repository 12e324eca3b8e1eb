import { existsSync } from 'node:fs';
import { join } from 'node:path';
import express, { Router } from 'express';

const YEAR_S = 365 * 24 * 3600;
/** Names with a hash of their content, as the builder gives them: they never change. */
const HASHED = /-[A-Z0-9]{8}\.\w+$/;

/** The built client: files by name, and index.html for every address that is the client's own. */
export function staticClient(folder: string): Router {
  const router = Router();
  const index = join(folder, 'index.html');
  router.use(
    express.static(folder, {
      index: false,
      setHeaders: (res, path) => {
        const name = path.slice(folder.length);
        res.set('Cache-Control', HASHED.test(name) ? `public, max-age=${YEAR_S}, immutable` : 'no-cache');
      },
    }),
  );
  router.get('/{*path}', (req, res, next) => {
    // A file that is not there is a 404, not a page.
    if (!req.accepts('html') || /\.\w{1,5}$/.test(req.path)) {
      next();
      return;
    }
    res.set('Cache-Control', 'no-cache');
    if (existsSync(index)) res.sendFile(index);
    else res.status(503).type('text/plain').send('The client has not been built. Run: npm run build\n');
  });
  return router;
}
