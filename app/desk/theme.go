package desk

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"
)

// palette is a set of the window's colours: greys around the image, so that
// they do not tint the eye, and one accent for what has the focus or is
// chosen.
type palette struct {
	ground, raised, field, edge color.NRGBA
	words, quiet, faint         color.NRGBA
	accent, wrong, hovered      color.NRGBA
	lines                       []color.NRGBA // of graphs
	variant                     fyne.ThemeVariant
}

// Every colour of words has a contrast of at least 4.5 to 1 against ground,
// raised and field (WCAG 2.1, success criterion 1.4.3); TestContrast measures
// it.
var (
	dark = palette{
		ground: color.NRGBA{0x19, 0x1a, 0x1c, 0xff}, raised: color.NRGBA{0x22, 0x23, 0x26, 0xff},
		field: color.NRGBA{0x2b, 0x2d, 0x31, 0xff}, edge: color.NRGBA{0x3a, 0x3c, 0x41, 0xff},
		words: color.NRGBA{0xd8, 0xda, 0xdd, 0xff}, quiet: color.NRGBA{0x9d, 0xa1, 0xa7, 0xff},
		faint: color.NRGBA{0x90, 0x94, 0x9a, 0xff}, accent: color.NRGBA{0x8f, 0xb8, 0x9e, 0xff},
		wrong: color.NRGBA{0xe0, 0x8f, 0x7c, 0xff}, hovered: color.NRGBA{0xff, 0xff, 0xff, 0x12},
		lines:   []color.NRGBA{{0xe8, 0xdc, 0xb8, 0xff}, {0x9c, 0xc3, 0xe6, 0xff}, {0xd8, 0xa0, 0xc8, 0xff}, {0xa8, 0xd0, 0x9a, 0xff}},
		variant: theme.VariantDark,
	}
	light = palette{
		ground: color.NRGBA{0xf1, 0xf1, 0xee, 0xff}, raised: color.NRGBA{0xfa, 0xfa, 0xf8, 0xff},
		field: color.NRGBA{0xff, 0xff, 0xff, 0xff}, edge: color.NRGBA{0xc9, 0xca, 0xc6, 0xff},
		words: color.NRGBA{0x20, 0x22, 0x25, 0xff}, quiet: color.NRGBA{0x55, 0x59, 0x5e, 0xff},
		faint: color.NRGBA{0x66, 0x6a, 0x70, 0xff}, accent: color.NRGBA{0x2b, 0x68, 0x4a, 0xff},
		wrong: color.NRGBA{0xa2, 0x38, 0x22, 0xff}, hovered: color.NRGBA{0, 0, 0, 0x12},
		lines:   []color.NRGBA{{0x2a, 0x2c, 0x30, 0xff}, {0x1d, 0x5d, 0x9b, 0xff}, {0x8a, 0x2f, 0x72, 0xff}, {0x3b, 0x6e, 0x2a, 0xff}},
		variant: theme.VariantLight,
	}
)

// The colours in use; see palette.use.
var (
	ground, raised, field, edge color.NRGBA
	words, quiet, faint         color.NRGBA
	accent, wrong, hovered      color.NRGBA
	graphLines                  []color.NRGBA
	variant                     fyne.ThemeVariant
)

func init() { dark.use() }

// use makes it the palette of all widgets made or refreshed from now on.
func (p palette) use() {
	ground, raised, field, edge = p.ground, p.raised, p.field, p.edge
	words, quiet, faint = p.words, p.quiet, p.faint
	accent, wrong, hovered = p.accent, p.wrong, p.hovered
	graphLines, variant = p.lines, p.variant
}

// look is the window's theme, in the palette in use.
type look struct{}

func (look) Color(name fyne.ThemeColorName, _ fyne.ThemeVariant) color.Color {
	switch name {
	case theme.ColorNameBackground:
		return ground
	case theme.ColorNameMenuBackground, theme.ColorNameOverlayBackground, theme.ColorNameHeaderBackground:
		return raised
	case theme.ColorNameInputBackground, theme.ColorNameButton, theme.ColorNameDisabledButton:
		return field
	case theme.ColorNameInputBorder, theme.ColorNameSeparator, theme.ColorNameScrollBar:
		return edge
	case theme.ColorNameForeground:
		return words
	case theme.ColorNamePlaceHolder:
		return quiet
	case theme.ColorNameDisabled:
		return faint
	case theme.ColorNamePrimary, theme.ColorNameHyperlink, theme.ColorNameSuccess:
		return accent
	case theme.ColorNameFocus, theme.ColorNameSelection:
		return withAlpha(accent, 0x48)
	case theme.ColorNameError, theme.ColorNameWarning:
		return wrong
	case theme.ColorNameForegroundOnPrimary, theme.ColorNameForegroundOnError,
		theme.ColorNameForegroundOnSuccess, theme.ColorNameForegroundOnWarning:
		return ground
	case theme.ColorNameHover, theme.ColorNamePressed:
		return hovered
	}
	return theme.DefaultTheme().Color(name, variant)
}

func withAlpha(c color.NRGBA, alpha uint8) color.NRGBA {
	c.A = alpha
	return c
}

func (look) Size(name fyne.ThemeSizeName) float32 {
	switch name {
	case theme.SizeNameText:
		return 12
	case theme.SizeNameCaptionText:
		return 11
	case theme.SizeNameSubHeadingText:
		return 14
	case theme.SizeNamePadding:
		return 3
	case theme.SizeNameInnerPadding:
		return 4
	case theme.SizeNameInlineIcon:
		return 16
	case theme.SizeNameInputRadius, theme.SizeNameSelectionRadius, theme.SizeNameButtonRadius:
		return 2
	}
	return theme.DefaultTheme().Size(name)
}

func (look) Font(style fyne.TextStyle) fyne.Resource { return theme.DefaultTheme().Font(style) }

func (look) Icon(name fyne.ThemeIconName) fyne.Resource { return theme.DefaultTheme().Icon(name) }
