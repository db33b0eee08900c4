const of = encodeURIComponent;
const notebook = (id: string): string => `/notebooks/${of(id)}`;
const edition = (id: string, number: number): string => `${notebook(id)}/editions/${String(number)}`;

/** Every page of the application: its pattern for the router and its builder for links. */
export const paths = {
  home: { pattern: '/', to: () => '/' },
  signIn: {
    pattern: '/sign-in',
    to: (back?: string) => (back === undefined ? '/sign-in' : `/sign-in?back=${of(back)}`),
  },
  /** Mails lead to these three; what they carry stands behind the #, which no server gets to see. */
  signInLink: { pattern: '/sign-in/link', to: () => '/sign-in/link' },
  invitation: { pattern: '/invitation', to: () => '/invitation' },
  address: { pattern: '/account/address', to: () => '/account/address' },
  account: { pattern: '/account', to: () => '/account' },
  notices: { pattern: '/notices', to: () => '/notices' },
  steward: { pattern: '/steward', to: () => '/steward' },
  jobs: { pattern: '/jobs', to: () => '/jobs' },
  shelf: { pattern: '/shelf', to: () => '/shelf' },
  bin: { pattern: '/bin', to: () => '/bin' },
  notebook: { pattern: '/notebooks/:notebook', to: notebook },
  editions: { pattern: '/notebooks/:notebook/editions', to: (id: string) => `${notebook(id)}/editions` },
  edition: { pattern: '/notebooks/:notebook/editions/:edition', to: edition },
  claimSheet: {
    pattern: '/notebooks/:notebook/editions/:edition/claims',
    to: (id: string, number: number) => `${edition(id, number)}/claims`,
  },
  compare: {
    pattern: '/notebooks/:notebook/compare',
    to: (id: string, left: string, right: string) => `${notebook(id)}/compare?left=${of(left)}&right=${of(right)}`,
  },
  collation: { pattern: '/notebooks/:notebook/collation', to: (id: string) => `${notebook(id)}/collation` },
  variants: { pattern: '/notebooks/:notebook/variants', to: (id: string) => `${notebook(id)}/variants` },
  sending: {
    pattern: '/notebooks/:notebook/variants/:sending',
    to: (id: string, sending: string) => `${notebook(id)}/variants/${of(sending)}`,
  },
  shared: { pattern: '/shared/:token', to: (token: string) => `/shared/${of(token)}` },
  catalogue: { pattern: '/catalogue', to: () => '/catalogue' },
  worked: { pattern: '/catalogue/:worked', to: (name: string) => `/catalogue/${of(name)}` },
  guide: { pattern: '/guide', to: () => '/guide' },
  chapter: { pattern: '/guide/:chapter', to: (chapter: string) => `/guide/${of(chapter)}` },
  try: { pattern: '/try', to: () => '/try' },
} as const;
