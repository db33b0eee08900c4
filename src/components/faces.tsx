import { Component, type ReactNode } from 'react';

/** The faces of a view besides the one with everything there: waiting, empty, failed. */

/** Shown only after a moment, so that a quick answer does not flicker. */
export function Waiting({ what }: { what: string }) {
  return (
    <p role="status" className="label late px-0 py-6">
      {what}
    </p>
  );
}

export function Empty({ title, children }: { title: string; children: ReactNode }) {
  return (
    <section className="measure py-8">
      <h2>{title}</h2>
      <div className="mt-3 space-y-3">{children}</div>
    </section>
  );
}

/** What went wrong, in words, and the way on. */
export function Failed({ what, error, retry }: { what: string; error: unknown; retry?: () => void }) {
  return (
    <section role="alert" className="measure py-6">
      <p className="ink-refuted">{what}</p>
      <p className="label mt-1">{error instanceof Error ? error.message : 'The reason is not known.'}</p>
      {retry && (
        <button type="button" className="act mt-2" onClick={retry}>
          try again
        </button>
      )}
    </section>
  );
}

interface GuardProps {
  readonly what: string;
  readonly children: ReactNode;
  /** A new value clears the failure: the report's version, or a path. */
  readonly until?: unknown;
}

/** Keeps the failure of one part of the page to that part. */
export class Guard extends Component<GuardProps, { error: unknown; failedAt: unknown }> {
  override state = { error: undefined as unknown, failedAt: undefined as unknown };

  static getDerivedStateFromError(error: unknown) {
    return { error };
  }

  static getDerivedStateFromProps(props: GuardProps, state: { error: unknown; failedAt: unknown }) {
    if (state.error === undefined) return { failedAt: props.until };
    return Object.is(state.failedAt, props.until) ? null : { error: undefined, failedAt: props.until };
  }

  override render() {
    if (this.state.error === undefined) return this.props.children;
    return <Failed what={this.props.what} error={this.state.error} retry={() => this.setState({ error: undefined })} />;
  }
}
