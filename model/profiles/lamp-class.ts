/** The names of the generic input stages that a lamp may be known by when its circuit is not. */
export const LAMP_CLASSES = ['reservoir-driver', 'corrected-converter', 'linear-string', 'series-capacitor-dropper', 'filament'] as const;

export type LampClass = (typeof LAMP_CLASSES)[number];
