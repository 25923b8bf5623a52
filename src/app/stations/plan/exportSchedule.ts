import { writePlanJson, writeScheduleCsv } from '../../../core/handover';
import { fileNameFor, offerFile } from '../../files/offerFile';
import { useDocument } from '../../state/document';
import { stream } from '../../state/stream';

/** Offers the planned tilt schedule as a CSV file. Does nothing while there is no plan. */
export function exportSchedule(): void {
  const plan = stream.shown?.plan;
  if (plan?.kind !== 'planned') return;
  const { rig } = useDocument.getState();
  const text = writeScheduleCsv(
    plan.course,
    rig.array.gyros.map((gyro) => gyro.name),
  );
  offerFile(fileNameFor(`${rig.name} tilt schedule`, 'csv'), text, 'text/csv');
}

/** Offers the whole plan, its curves and its ledger, as JSON. Does nothing while there is no plan. */
export function exportPlan(): void {
  const { shown } = stream;
  if (shown?.plan.kind !== 'planned') return;
  const { rig } = useDocument.getState();
  const text = writePlanJson(rig, shown.plan.course, shown.ledger);
  offerFile(fileNameFor(`${rig.name} plan`, 'json'), text, 'application/json');
}
