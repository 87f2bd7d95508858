/** The two schemes: steel is light, dye is dark. Names are roles, not hues. */
export const schemes = {
  steel: {
    ground: '#E8ECEF',
    plate: '#F8FAFB',
    plateRaised: '#FFFFFF',
    scribe: '#10183F',
    scribeSoft: '#515C7A',
    hairline: '#C5CDD8',
    dye: '#2A37A8',
    onDye: '#FFFFFF',
    band: 'rgba(42,55,168,0.15)',
    forward: '#00695C',
    reverse: '#A33A00',
    still: '#515C7A',
    warn: '#8A5300',
    fault: '#A1122F',
    good: '#1F6B2E',
  },
  dye: {
    ground: '#0B1239',
    plate: '#131C52',
    plateRaised: '#1B2668',
    scribe: '#F2F5FF',
    scribeSoft: '#A8B3E3',
    hairline: '#33407F',
    dye: '#8C9BFF',
    onDye: '#0B1239',
    band: 'rgba(140,155,255,0.20)',
    forward: '#6FE3C4',
    reverse: '#FFB184',
    still: '#A8B3E3',
    warn: '#FFD166',
    fault: '#FF8CA0',
    good: '#8BE39A',
  },
} as const;

export type Scheme = keyof typeof schemes;
export type ColourName = keyof (typeof schemes)['steel'];
export type Colours = Record<ColourName, string>;

/** Everything stands on a grid of 4 px. */
export const space = { xs: 4, s: 8, m: 12, l: 16, xl: 24, xxl: 32, huge: 48 } as const;

export const type = { tiny: 12, small: 14, body: 16, lead: 20, title: 28, large: 40, speed: 72 } as const;
export type TypeSize = keyof typeof type;

export const weights = {
  regular: 'SpaceGrotesk_400Regular',
  medium: 'SpaceGrotesk_500Medium',
  bold: 'SpaceGrotesk_700Bold',
} as const;
export const mono = { regular: 'SpaceMono_400Regular', bold: 'SpaceMono_700Bold' } as const;
export type Weight = keyof typeof weights;

export const size = {
  /** Smallest target of a finger. */
  target: 44,
  button: 48,
  /** For gloves. */
  keep: 64,
  chamfer: 10,
  /** From this width on: left rail instead of bottom bar. */
  wideFrom: 900,
} as const;
