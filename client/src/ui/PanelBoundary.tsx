import { QueryErrorResetBoundary } from '@tanstack/react-query';
import { Component, Suspense, type ReactNode } from 'react';
import { Section } from './Page';
import { ProblemNote } from './ProblemNote';
import { WaitingLines } from './Waiting';

interface CatchProps {
  children: ReactNode;
  frame: (content: ReactNode) => ReactNode;
  onReset: () => void;
}

class Catch extends Component<CatchProps, { error: unknown }> {
  override state: { error: unknown } = { error: null };

  static getDerivedStateFromError(error: unknown) {
    return { error };
  }

  override render() {
    if (this.state.error === null) return this.props.children;
    return this.props.frame(
      <ProblemNote
        className="my-3"
        error={this.state.error}
        onRetry={() => {
          this.props.onReset();
          this.setState({ error: null });
        }}
      />,
    );
  }
}

interface PanelBoundaryProps {
  children: ReactNode;
  waiting?: ReactNode;
  /** It holds whole sections: what stands in their place keeps clear of the margin too. */
  sections?: boolean;
}

/** One panel of a page: while it loads it holds its place, and when it fails the rest of the page stays. */
export function PanelBoundary({ children, waiting = <WaitingLines />, sections = false }: PanelBoundaryProps) {
  const frame = (content: ReactNode) => (sections ? <Section>{content}</Section> : content);
  return (
    <QueryErrorResetBoundary>
      {({ reset }) => (
        <Catch frame={frame} onReset={reset}>
          <Suspense fallback={frame(waiting)}>{children}</Suspense>
        </Catch>
      )}
    </QueryErrorResetBoundary>
  );
}
