import { ensureInstalled, ensureWebBuilt } from './lib.mjs';

ensureInstalled();
ensureWebBuilt();
