import type { HoldCode } from '../../lib/wire';

interface Reason {
  heading: string;
  /** After a count of reads: "812 with a clock that was ahead". */
  part: string;
  means: string;
  toDo: string;
}

/** Why reads are set aside, those that something can be done about first. */
export const reasons: Record<HoldCode, Reason> = {
  'clock-ahead': {
    heading: 'Clock ahead',
    part: 'with a clock ahead',
    means:
      'When they came in, their times lay more than five minutes ahead: the clock of the reader was wrong.',
    toDo: 'Have the clock set right. Release the reads when their times are near enough to be used as they stand.',
  },
  'unknown-antenna': {
    heading: 'No such antenna',
    part: 'from an unknown antenna',
    means: 'The reader gave the number of an antenna that its site does not have here.',
    toDo: 'Add the antenna. Its reads are then used without further doing.',
  },
  'unmapped-epc': {
    heading: 'EPC of no car or box',
    part: 'with an EPC of no car or box',
    means:
      'An EPC does not say what it is fixed to, and nothing on the register wore these at the time of the read.',
    toDo: 'Say which car or box wears the tag. Its reads are then used without further doing.',
  },
  'check-failed': {
    heading: 'Check failed',
    part: 'with a check that failed',
    means: 'The check sum or check digit of the tag is wrong: it was misread, or written wrong.',
    toDo: 'Nothing to do here. A tag that comes again and again wants to be replaced.',
  },
  'undecodable-tag': {
    heading: 'Tag not understood',
    part: 'with a tag not understood',
    means: 'What the reader gave is neither a tag of a car or box nor a number of one.',
    toDo: 'Nothing to do here. Many at one site come from noise or from tags of other things.',
  },
  'not-equipment': {
    heading: 'No car, box or locomotive',
    part: 'of something else than cars and boxes',
    means: 'The tag is sound and says that it is fixed to something else.',
    toDo: 'Nothing to do here.',
  },
  'too-old': {
    heading: 'Too old',
    part: 'too old',
    means: 'When they came in, their times lay before the months that reads are kept for.',
    toDo: 'Nothing to do: history is closed before that, and they can not be released.',
  },
};

/** Codes in the order in which the screen shows them. */
export const reasonOrder = Object.keys(reasons) as HoldCode[];

/** The reason that an address names; null for none or one that is not known. */
export const readCode = (text: string | null): HoldCode | null =>
  reasonOrder.find((code) => code === text) ?? null;
