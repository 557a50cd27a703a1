import { inFile } from './in-file.mjs';

/** Rules by which the running projections keep up with the ledger. */
export const projectionMutations = [
  ...inFile('server/lib/lease.ts', 'lease', [
    [
      'a worker that has lost its lease commits nothing',
      'if (!row?.held) throw new LeaseLost(lease.name);',
    ],
    [
      'a lease that has not expired is nobody else’s',
      'holder = IF(expires_at < NOW(3), VALUES(holder), holder),',
      'holder = VALUES(holder),',
    ],
  ]),
];
