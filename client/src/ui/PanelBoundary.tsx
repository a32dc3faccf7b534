import { QueryErrorResetBoundary } from '@tanstack/react-query';
import { Component, Suspense, type ReactNode } from 'react';
import { ProblemNote } from './ProblemNote';
import { WaitingLines } from './Waiting';

interface CatchProps {
  children: ReactNode;
  onReset: () => void;
}

class Catch extends Component<CatchProps, { error: unknown }> {
  override state: { error: unknown } = { error: null };

  static getDerivedStateFromError(error: unknown) {
    return { error };
  }

  override render() {
    if (this.state.error === null) return this.props.children;
    return (
      <ProblemNote
        className="my-3"
        error={this.state.error}
        onRetry={() => {
          this.props.onReset();
          this.setState({ error: null });
        }}
      />
    );
  }
}

/** One panel of a page: while it loads it holds its place, and when it fails the rest of the page stays. */
export function PanelBoundary({ children, waiting = <WaitingLines /> }: { children: ReactNode; waiting?: ReactNode }) {
  return (
    <QueryErrorResetBoundary>
      {({ reset }) => (
        <Catch onReset={reset}>
          <Suspense fallback={waiting}>{children}</Suspense>
        </Catch>
      )}
    </QueryErrorResetBoundary>
  );
}
