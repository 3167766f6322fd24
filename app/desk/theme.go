package desk

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"
)

// The window's colours: greys around the image, so that they do not tint the
// eye, and one accent for what has the focus or is chosen.
var (
	ground  = color.NRGBA{0x19, 0x1a, 0x1c, 0xff} // behind everything
	raised  = color.NRGBA{0x22, 0x23, 0x26, 0xff} // menus, dialogs
	field   = color.NRGBA{0x2b, 0x2d, 0x31, 0xff} // what takes input
	edge    = color.NRGBA{0x3a, 0x3c, 0x41, 0xff} // separators, borders
	words   = color.NRGBA{0xd3, 0xd5, 0xd8, 0xff}
	quiet   = color.NRGBA{0x93, 0x97, 0x9d, 0xff} // words of second rank
	faint   = color.NRGBA{0x7c, 0x80, 0x87, 0xff} // disabled
	accent  = color.NRGBA{0x8f, 0xb8, 0x9e, 0xff}
	wrong   = color.NRGBA{0xe0, 0x8f, 0x7c, 0xff}
	overlay = color.NRGBA{0xff, 0xff, 0xff, 0x12} // under the pointer
)

// look is the window's theme. It is dark whatever the desktop prefers: the
// image is.
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
		return overlay
	}
	return theme.DefaultTheme().Color(name, theme.VariantDark)
}

func withAlpha(c color.NRGBA, alpha uint8) color.NRGBA {
	c.A = alpha
	return c
}

func (look) Size(name fyne.ThemeSizeName) float32 {
	switch name {
	case theme.SizeNameText:
		return 13
	case theme.SizeNameCaptionText:
		return 11
	case theme.SizeNameSubHeadingText:
		return 14
	case theme.SizeNamePadding:
		return 3
	case theme.SizeNameInnerPadding:
		return 5
	case theme.SizeNameInlineIcon:
		return 16
	case theme.SizeNameInputRadius, theme.SizeNameSelectionRadius, theme.SizeNameButtonRadius:
		return 2
	}
	return theme.DefaultTheme().Size(name)
}

func (look) Font(style fyne.TextStyle) fyne.Resource { return theme.DefaultTheme().Font(style) }

func (look) Icon(name fyne.ThemeIconName) fyne.Resource { return theme.DefaultTheme().Icon(name) }
