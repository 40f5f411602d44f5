// The second thread of a zoning: loads its program with the code kept of it.
import { inCheckout } from '../checkout.mjs';
import { loadProgram } from './keptCode.mjs';

const { exports: program, keep } = loadProgram(inCheckout('dist/zone/secondThreadEntry.cjs'), inCheckout('dist/zone/thread.code'));
program.listen(keep);
