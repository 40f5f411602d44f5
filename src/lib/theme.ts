import { definePreset } from '@primeuix/themes';
import base from '@primeuix/themes/aura/base';
import button from '@primeuix/themes/aura/button';
import dialog from '@primeuix/themes/aura/dialog';
import popover from '@primeuix/themes/aura/popover';

/** PrimeVue in our own clothes: every colour comes from the tokens, so one class on <html> changes both. */

const corners = { none: '0', xs: '4px', sm: '4px', md: '4px', lg: '4px', xl: '4px' };

const slate = {
  50: '#EEF3F3', 100: '#DCE6E6', 200: '#B7C4C4', 300: '#8FA6AA', 400: '#5B7C85', 500: '#24505E',
  600: '#1F4753', 700: '#1B3F4B', 800: '#173843', 900: '#122C35', 950: '#0C1F26',
};

const chalk = {
  0: '#FFFFFF', 50: '#FAF8F3', 100: '#F6F4EE', 200: '#ECE9DF', 300: '#D9D5C8', 400: '#B3B0A4', 500: '#87897F',
  600: '#5F655F', 700: '#3F4A4C', 800: '#2B3940', 900: '#1C2B33', 950: '#101A1F',
};

const focusRing = { width: '3px', style: 'solid', color: 'var(--sky)', offset: '2px', shadow: 'none' };

/** The tokens carry the theme, so both schemes read the same. */
const scheme = {
  surface: chalk,
  primary: { color: 'var(--slate)', contrastColor: 'var(--on)', hoverColor: 'var(--slate-deep)', activeColor: 'var(--slate-deep)' },
  highlight: { background: 'var(--pick)', focusBackground: 'var(--pick)', color: 'var(--ink)', focusColor: 'var(--ink)' },
  mask: { background: 'rgba(16, 26, 31, 0.45)', color: 'var(--ink)' },
  formField: {
    background: 'var(--sheet)', disabledBackground: 'var(--tint)', filledBackground: 'var(--sheet)', filledHoverBackground: 'var(--sheet)', filledFocusBackground: 'var(--sheet)',
    borderColor: 'var(--line)', hoverBorderColor: 'var(--ink)', focusBorderColor: 'var(--sky)', invalidBorderColor: 'var(--brick)',
    color: 'var(--ink)', disabledColor: 'var(--muted)', placeholderColor: 'var(--muted)', invalidPlaceholderColor: 'var(--brick)',
    floatLabelColor: 'var(--muted)', floatLabelFocusColor: 'var(--ink)', floatLabelActiveColor: 'var(--muted)', floatLabelInvalidColor: 'var(--brick)', iconColor: 'var(--muted)', shadow: 'none',
  },
  text: { color: 'var(--ink)', hoverColor: 'var(--ink)', mutedColor: 'var(--muted)', hoverMutedColor: 'var(--muted)' },
  content: { background: 'var(--ground)', hoverBackground: 'var(--tint)', borderColor: 'var(--rule)', color: 'var(--ink)', hoverColor: 'var(--ink)' },
  overlay: {
    select: { background: 'var(--sheet)', borderColor: 'var(--line)', color: 'var(--ink)' },
    popover: { background: 'var(--ground)', borderColor: 'var(--line)', color: 'var(--ink)' },
    modal: { background: 'var(--ground)', borderColor: 'var(--line)', color: 'var(--ink)' },
  },
  list: { option: { focusBackground: 'var(--tint)', selectedBackground: 'var(--pick)', selectedFocusBackground: 'var(--pick)', color: 'var(--ink)', focusColor: 'var(--ink)', selectedColor: 'var(--ink)', selectedFocusColor: 'var(--ink)', icon: { color: 'var(--muted)', focusColor: 'var(--ink)' } } },
  navigation: { item: { focusBackground: 'var(--tint)', activeBackground: 'var(--tint)', color: 'var(--ink)', focusColor: 'var(--ink)', activeColor: 'var(--ink)' } },
};

const flat = { shadow: 'none', borderRadius: '4px' };

/** Only the parts that we use: the whole set is 25 KB that every phone would load first. */
const aura = { ...base, components: { button, dialog, popover } };

const patchrowTheme = definePreset(aura, {
  primitive: { borderRadius: corners },
  semantic: {
    primary: slate,
    focusRing,
    transitionDuration: '120ms',
    formField: { paddingX: '.625rem', paddingY: '.5rem', borderRadius: '4px', focusRing },
    overlay: { select: flat, popover: { ...flat, padding: '16px' }, modal: { ...flat, padding: '24px' }, navigation: { shadow: 'none' } },
    colorScheme: { light: scheme, dark: scheme },
  },
  components: {
    button: { root: { label: { fontWeight: '600' }, raisedShadow: 'none', paddingX: '16px', paddingY: '7px', focusRing: { width: '3px', style: 'solid', offset: '2px' } } },
  },
});

export const primeVueOptions = {
  theme: { preset: patchrowTheme, options: { darkModeSelector: '.dark', cssLayer: { name: 'primevue', order: 'primevue, patchrow' } } },
  ripple: false,
};
