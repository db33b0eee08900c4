/** Every page of the application: its pattern for the router and its builder for links. */
export const paths = {
  home: { pattern: '/', to: () => '/' },
  signIn: {
    pattern: '/sign-in',
    to: (back?: string) => (back === undefined ? '/sign-in' : `/sign-in?back=${encodeURIComponent(back)}`),
  },
  jobs: { pattern: '/jobs', to: () => '/jobs' },
  shelf: { pattern: '/shelf', to: () => '/shelf' },
  notebook: { pattern: '/notebooks/:notebook', to: (notebook: string) => `/notebooks/${encodeURIComponent(notebook)}` },
  edition: {
    pattern: '/notebooks/:notebook/editions/:edition',
    to: (notebook: string, edition: number) => `/notebooks/${encodeURIComponent(notebook)}/editions/${String(edition)}`,
  },
  shared: { pattern: '/shared/:token', to: (token: string) => `/shared/${encodeURIComponent(token)}` },
  catalogue: { pattern: '/catalogue', to: () => '/catalogue' },
  worked: { pattern: '/catalogue/:worked', to: (name: string) => `/catalogue/${encodeURIComponent(name)}` },
  guide: { pattern: '/guide', to: () => '/guide' },
  chapter: { pattern: '/guide/:chapter', to: (chapter: string) => `/guide/${encodeURIComponent(chapter)}` },
  try: { pattern: '/try', to: () => '/try' },
} as const;
