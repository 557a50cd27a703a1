/** Cars of the branch that show one case each, by compact identity, for as long as the demo runs. */
export const branchCars = {
  /** Stands in the beam of Sorrel Yard's second track for three hours of each round. */
  inTheBeam: 'QWKR160001',
  /** Stands beside Sorrel Yard's first track, where an antenna hears it now and then. */
  beside: 'QWKR160002',
  /** Lost its right tag to `impostor`, and nobody told the register. */
  robbed: 'QWKR160003',
  impostor: 'QWKR160004',
  /** Two dead tags: known from hand reports alone. */
  byHand: 'QWKR160011',
  /** The left tag that spells `from` goes to and fro between the two; the register dates it. */
  lent: { from: 'QTKX40401', to: 'QTKX40402' },
  /** Both of its own tags are dead. */
  silent: ['QWKR160004', 'QWKR160011'],
  /** Go with the first train of the branch: Pipit, Linnet, Sorrel, Rowan and back. */
  missedExit: 'QTKX40403',
  history: 'QTKX40404',
  late: 'QTKX40405',
  deadAntennas: 'QTKX40406',
  stopsOver: 'QTKX40407',
  /** Goes with the second, to a kiln that no reader sees. */
  reported: 'QWKR160007',
  trailer: 'QWTZ410001',
  /** Of the region, not of the branch. */
  box: 'ZQXU3054000',
  engine: 'QWKR2101',
};
