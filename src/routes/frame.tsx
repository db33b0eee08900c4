import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import { Link, NavLink, Outlet, useLocation, useNavigate } from 'react-router-dom';
import { call } from '../api/client.ts';
import { useLiveMine } from '../api/live.ts';
import { meQuery } from '../api/queries.ts';
import { chosenTheme, chooseTheme, type Theme } from '../components/theme.ts';
import { CommandLine } from '../features/commands/command-line.tsx';
import type { Command } from '../features/commands/commands.ts';
import { CommandsContext, noOffer, type Offer } from '../features/commands/context.ts';
import { paths } from './paths.ts';

/** The frame of every page: the top line, the page, and the keyboard's line. */
export function Frame() {
  const page = useRef<Offer>(noOffer);
  const take = useCallback((offer: Offer) => {
    page.current = offer;
  }, []);
  const [commands, setCommands] = useState<readonly Command[] | null>(null);
  const own = useFrameCommands();
  const close = useCallback(() => setCommands(null), []);
  const ask = () => setCommands([...page.current(), ...own]);
  useSemicolon(() => (commands === null ? ask() : close()));
  useAnnouncedPage();
  return (
    <CommandsContext value={take}>
      <div className="folio">
        <a className="skip-link label" href="#page">
          Skip to the page
        </a>
        <TopBar ask={ask} />
        <Outlet />
      </div>
      <CommandLine commands={commands} close={close} />
    </CommandsContext>
  );
}

function TopBar({ ask }: { ask: () => void }) {
  const me = useQuery(meQuery());
  const person = me.data?.person;
  useLiveMine(person?.id ?? null);
  return (
    <header className="top-bar label">
      <Link to={paths.home.to()} className="top-name font-serif text-ink">
        Gaugewright
      </Link>
      <nav aria-label="Main">
        {person && <NavLink to={paths.shelf.to()}>Shelf</NavLink>}
        {person && <NavLink to={paths.jobs.to()}>Jobs</NavLink>}
        <NavLink to={paths.catalogue.to()}>Catalogue</NavLink>
        <NavLink to={paths.guide.to()}>Guide</NavLink>
        {!person && <NavLink to={paths.try.to()}>Try</NavLink>}
      </nav>
      <div className="top-right">
        <button type="button" className="act" onClick={ask} aria-keyshortcuts="Control+; Meta+;">
          Find or do
        </button>
        <ThemeSwitch />
        {person && (
          <NavLink to={paths.notices.to()}>
            Notices{person.unread > 0 && <span className="new-mark"> {person.unread}</span>}
            {person.unread > 0 && <span className="aside-only"> unread</span>}
          </NavLink>
        )}
        {person ? <Person name={person.name} /> : <NavLink to={paths.signIn.to()}>Sign in</NavLink>}
      </div>
    </header>
  );
}

const themeWords: Readonly<Record<Theme, string>> = { system: 'as the system', light: 'light', dark: 'dark' };
const nextTheme: Readonly<Record<Theme, Theme>> = { system: 'light', light: 'dark', dark: 'system' };

function ThemeSwitch() {
  const [theme, setTheme] = useState(chosenTheme);
  return (
    <button
      type="button"
      className="act"
      onClick={() => {
        const next = nextTheme[theme];
        chooseTheme(next);
        setTheme(next);
      }}
    >
      Paper: {themeWords[theme]}
    </button>
  );
}

function Person({ name }: { name: string }) {
  const signOut = useSignOut();
  return (
    <span className="inline-flex flex-wrap items-baseline gap-x-4">
      <NavLink to={paths.account.to()}>{name}</NavLink>
      <button type="button" className="act" onClick={() => void signOut()}>
        Sign out
      </button>
    </span>
  );
}

function useSignOut(): () => Promise<void> {
  const client = useQueryClient();
  const navigate = useNavigate();
  return useCallback(async () => {
    await call('signOut');
    // Nothing of this person stays with the next one at this browser.
    client.clear();
    await navigate(paths.home.to());
  }, [client, navigate]);
}

function useFrameCommands(): readonly Command[] {
  const navigate = useNavigate();
  const signOut = useSignOut();
  const me = useQuery(meQuery());
  const signedIn = me.data?.person != null;
  const steward = me.data?.may.includes('steward') ?? false;
  return useMemo(() => {
    const go = (words: string, to: string): Command => ({ words, run: () => void navigate(to) });
    const theme = (one: Theme): Command => ({
      words: `paper: ${themeWords[one]}`,
      also: 'theme ink',
      run: () => chooseTheme(one),
    });
    return [
      ...(signedIn
        ? [
            go('go to the shelf', paths.shelf.to()),
            go('go to the notices', paths.notices.to()),
            go('go to the account', paths.account.to()),
          ]
        : [go('sign in', paths.signIn.to())]),
      ...(steward ? [go('go to stewardship', paths.steward.to())] : []),
      go('go to the catalogue', paths.catalogue.to()),
      go('go to the guide', paths.guide.to()),
      go('try an example', paths.try.to()),
      theme('light'),
      theme('dark'),
      theme('system'),
      ...(signedIn ? [{ words: 'sign out', run: () => void signOut() }] : []),
    ];
  }, [navigate, signOut, signedIn, steward]);
}

/** Control or Command with the semicolon, anywhere on the page. */
function useSemicolon(toggle: () => void): void {
  useEffect(() => {
    const listen = (event: KeyboardEvent) => {
      if (!(event.ctrlKey || event.metaKey) || event.key !== ';') return;
      event.preventDefault();
      toggle();
    };
    addEventListener('keydown', listen);
    return () => removeEventListener('keydown', listen);
  });
}

/** Another page begins at its top, with the focus on its main part, as a page load would. */
function useAnnouncedPage(): void {
  const { pathname } = useLocation();
  const shown = useRef(pathname);
  useEffect(() => {
    if (shown.current === pathname) return;
    shown.current = pathname;
    scrollTo(0, 0);
    document.getElementById('page')?.focus({ preventScroll: true });
  }, [pathname]);
}
