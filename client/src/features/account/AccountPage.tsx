import { useMe } from '../../lib/me';
import { ROLE_WORDS, STUDY_ROLE_WORDS } from '../../lib/words';
import { Fact, Facts } from '../../ui/Fact';
import { Page, Section } from '../../ui/Page';
import { PanelBoundary } from '../../ui/PanelBoundary';
import { NameForm } from './NameForm';
import { PasswordForm } from './PasswordForm';
import { SignInList } from './SignInList';

export function AccountPage() {
  const me = useMe();
  return (
    <Page title="Account" lead={me.email}>
      <Section narrow>
        <Facts>
          <Fact name="Role in the lab">{ROLE_WORDS[me.role]}</Fact>
          <Fact name="Studies">
            {me.memberships.length === 0 ? <span className="text-soft">none; a study’s lead can add you</span> : (
              <ul>{me.memberships.map((membership) => <li key={membership.studyId}>{membership.studyTitle} <span className="text-soft">· {STUDY_ROLE_WORDS[membership.role]}{membership.blind ? ', blind to conditions' : ''}</span></li>)}</ul>
            )}
          </Fact>
        </Facts>
      </Section>
      <Section title="Name" note="beside what you write"><NameForm name={me.name} /></Section>
      <Section title="Password" note="ends all other sign-ins"><PasswordForm /></Section>
      <Section narrow title="Where you are signed in"><PanelBoundary><SignInList /></PanelBoundary></Section>
    </Page>
  );
}
