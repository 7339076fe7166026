/**
 * The product's own icons: paths on a grid of 24, 2 px butt strokes with square joins, no fill. Always shown with a
 * word; they carry no meaning of their own.
 */
export const ICONS = {
  crate: 'M3 6h18v14H3zM3 11h18M8 6v14M16 6v14',
  drum: 'M5 3h14M5 21h14M6 3v18M18 3v18M6 9h12M6 15h12',
  sack: 'M8 3h8M9 3l1 4M15 3l-1 4M10 7h4l5 6v8H5v-8zM9 14h6',
  docket: 'M3 5h18v14H3l4-7zM12 10v4M16 10v4',
  seal: 'M12 3 15 5.2 18.7 5.3 18.8 9 21 12 18.8 15 18.7 18.7 15 18.8 12 21 9 18.8 5.3 18.7 5.2 15 3 12 5.2 9 5.3 5.3 9 5.2zM9 12h6',
  'rope-knot': 'M2 14h6l8-6h6M2 10h6l8 6h6M12 7v10',
  pile: 'M6 3v14M12 3v18M18 3v14M4 7h16M4 12h16',
  waterline: 'M12 3v18M3 12h4l2-2 2 2h2l2-2 2 2h4M8 5h8M8 19h8',
  probe: 'M4 20 9 15M8 12l4 4M10 14 17 7l2 2 2-2-4-4-2 2 2 2M18 15l3 3M15 18l3 3',
  lamp: 'M8 10a4 4 0 1 1 8 0v5H8zM9 18h6M10 21h4M12 2v2M4 5l2 2M20 5l-2 2',
  ledger: 'M5 3h14v18H5zM9 3v18M12 8h4M12 12h4M12 16h4',
  stamp: 'M10 3h4v7h4v5H6v-5h4zM4 20h16',
  key: 'M3 12a4 4 0 1 0 8 0 4 4 0 1 0-8 0M11 12h10v5M17 12v4',
  bell: 'M6 17v-7a6 6 0 1 1 12 0v7M3 17h18M10 20h4',
  funnel: 'M3 4h18l-7 9v7l-4-2v-5z',
  'arrow-out': 'M10 4H4v16h16v-6M13 4h7v7M20 4 10 14',
  'arrow-left': 'M21 12H5M11 5l-7 7 7 7',
  'arrow-right': 'M3 12h16M13 5l7 7-7 7',
  tick: 'M4 13l5 5L20 6',
  // A lozenge: a triangle would read as the verdict "cannot tell".
  caution: 'M12 1.5 22.5 12 12 22.5 1.5 12zM12 6.5v7M12 15.5v2.5',
  stop: 'M8 3h8l5 5v8l-5 5H8l-5-5V8zM8 12h8',
  aside: 'M3 4h10v16H3zM16 8v8M16 12h6M19 9l3 3-3 3',
  menu: 'M3 6h18M3 12h18M3 18h18',
  close: 'M5 5l14 14M19 5 5 19',
  find: 'M4 10a6 6 0 1 0 12 0 6 6 0 1 0-12 0M15 15l6 6',
  query: 'M8 8a4 4 0 1 1 6 3.5c-1.4.9-2 1.6-2 3.5M12 18v2',
  person: 'M8 7a4 4 0 1 0 8 0 4 4 0 1 0-8 0M4 21v-3l3-3h10l3 3v3',
  clock: 'M3 12a9 9 0 1 0 18 0 9 9 0 1 0-18 0M12 6v6l4 3',
  file: 'M6 3h8l5 5v13H6zM14 3v5h5'
} as const;

export type IconName = keyof typeof ICONS;

export const isIcon = (name: string): name is IconName => Object.hasOwn(ICONS, name);
