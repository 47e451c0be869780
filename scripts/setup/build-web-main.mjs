import { ensureWebBuilt } from './build-web.mjs';

await ensureWebBuilt();
