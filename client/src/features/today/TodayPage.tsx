import { useMe } from '../../lib/me';
import { Page } from '../../ui/Page';
import { PanelBoundary } from '../../ui/PanelBoundary';
import { AdministratorToday } from './AdministratorToday';
import { ClinicianToday } from './ClinicianToday';
import { RoomToday } from './RoomToday';

const weekday = new Intl.DateTimeFormat('en-GB', { weekday: 'long', day: 'numeric', month: 'long' });

/** What waits for the reader, by what they come for. */
export function TodayPage() {
  const me = useMe();
  return (
    <Page title="Today" lead={weekday.format(new Date())} margin={me.demo ? 'demo lab, invented people' : undefined}>
      {me.role === 'clinician' ? <PanelBoundary sections><ClinicianToday /></PanelBoundary> : null}
      {me.role === 'administrator' ? <AdministratorToday /> : null}
      {me.role === 'clinician' || (me.role === 'administrator' && me.memberships.length === 0) ? null : <PanelBoundary sections><RoomToday /></PanelBoundary>}
    </Page>
  );
}
