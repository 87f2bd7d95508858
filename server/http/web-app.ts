/** The exported web app: hashed files are kept for a year, the page itself is asked for each time. */
import { existsSync } from 'node:fs';
import { join, sep } from 'node:path';
import compression from 'compression';
import express, { Router } from 'express';
import type { Request } from 'express';

/** Metro writes a hash of 32 hex digits into the names of scripts, and of fonts and pictures. */
const hashedName = /[.-][0-9a-f]{20,64}\.[a-z0-9]+$/;

/** A script asks for a page like a person does; an address that names a file means that file. */
function wantsPage(req: Request): boolean {
  if (/\.[a-z0-9]+$/i.test(req.path)) return false;
  return (req.method === 'GET' || req.method === 'HEAD') && req.accepts(['html', 'json']) === 'html';
}

/** Compresses what is worth it; live and ingest answers are small and pass untouched. */
export const compressed = compression({ threshold: 1024 });

export function webApp(webDir: string): Router {
  const router = Router();
  const page = join(webDir, 'index.html');
  router.use(
    express.static(webDir, {
      index: false,
      setHeaders(res, path) {
        const name = path.slice(path.lastIndexOf(sep) + 1);
        const keep = hashedName.test(name) ? 'public, max-age=31536000, immutable' : 'no-cache';
        res.setHeader('Cache-Control', keep);
      },
    }),
  );
  router.use((req, res, next) => {
    if (!wantsPage(req) || !existsSync(page)) {
      next();
      return;
    }
    res.set('Cache-Control', 'no-cache');
    res.sendFile('index.html', { root: webDir, cacheControl: false });
  });
  return router;
}
