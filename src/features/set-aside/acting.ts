import type { HeldGroupView, HeldTagView } from '../../lib/wire';

/** What a person is about to do, with what they do it to as it stood when they began. */
export type Acting =
  | { act: 'release'; group: HeldGroupView }
  | { act: 'addAntenna'; group: HeldGroupView }
  | { act: 'putTag'; tag: HeldTagView };

export type OnAct = (acting: Acting) => void;
