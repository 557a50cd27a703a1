/** The shapes of the contract under the names that the screens use. */
import type { SessionAnswer } from '../../server/contract/session';

export type { AntennaInput } from '../../server/contract/administration';
export type { ReadPointView } from '../../server/contract/administration-answers';
export type { AlertState, AlertView, AlertListAnswer } from '../../server/contract/alerts';
export type { DemoCasesAnswer, DemoCaseView } from '../../server/contract/demo-cases';
export type { DoubtsAnswer, DoubtView, UnitDoubtsAnswer } from '../../server/contract/doubts';
export type {
  EquipmentDetail,
  EquipmentDetailAnswer,
  EquipmentItem,
  EquipmentListAnswer,
  UnitState,
} from '../../server/contract/equipment';
export type { ChangedEvent } from '../../server/contract/events';
export type { FleetSummary } from '../../server/contract/fleet';
export type {
  HeldGroupView,
  HeldListAnswer,
  HeldReadsAnswer,
  HeldReadView,
  HeldTagsAnswer,
  HeldTagView,
  ReleaseAnswer,
} from '../../server/contract/held-reads';
export type { HoldCode } from '../../server/contract/ingest';
export type { HandReportsAnswer } from '../../server/contract/hand-reports';
export type { LookUpHit } from '../../server/contract/look-up';
export type { LookUpAnswer as LookUpReply } from '../../server/contract/look-up';
export type { EdgeFeature, MapAnswer, SiteFeature } from '../../server/contract/map';
export type {
  LegView,
  MovementsAnswer,
  RawReadView,
  ReadsAnswer,
  SightingView,
  SightingsAnswer,
  StayView,
} from '../../server/contract/movements';
export type { RebuildListAnswer, RebuildState, RebuildView } from '../../server/contract/rebuilds';
export type { UnitReportView, UnitReportsAnswer } from '../../server/contract/unit-reports';
export type {
  WatchInput,
  WatchKind,
  WatchListAnswer,
  WatchPreviewAnswer,
  WatchPreviewInput,
  WatchScope,
  WatchView,
} from '../../server/contract/watches';

/** Who is signed in and what they may open. */
export type SessionInfo = SessionAnswer['data'];
/** A site or reader by code and name. */
export interface Named {
  code: string;
  name: string;
}
