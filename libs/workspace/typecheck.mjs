// Type-checks every part: the Node side with tsc, the client (templates included) with Angular's compiler.
import { run } from './run.mjs';

await run('npx', ['tsc', '-p', 'tsconfig.node.json', '--noEmit', '--composite', 'false']);
await run('npx', ['ngc', '-p', 'apps/web/tsconfig.app.json', '--noEmit', '--composite', 'false']);
