/** `npm run contrast`: a plan over recordings without a browser; `-- --help` says how. */
import { ensureHeadless } from './lib/headless.mjs';

const { contrast, thread } = await ensureHeadless();
const { main } = await import(contrast.href);
process.exit(await main(process.argv.slice(2), thread));
