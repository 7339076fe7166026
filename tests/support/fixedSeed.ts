import { configureGlobal } from 'fast-check';

/** Generated cases are the same in every run, so that a failure seen once can be looked at again. */
configureGlobal({ seed: 20_261_201 });
