import { Page } from '../../ui/Page';
export function TodayPage() {
  return <Page title="Today">{null}</Page>;
}
