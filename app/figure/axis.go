package figure

import (
	"math"
	"strconv"
	"strings"

	"annulet/app/ink"
)

// nowhere breaks a line.
var nowhere = point{math.NaN(), math.NaN()}

// axis is a scale along one side of a box, from the left or from below. Lo
// may lie above Hi.
type axis struct {
	Lo, Hi float64
	Log    bool
	Title  string  // with its unit; "" for ticks alone
	Bare   bool    // no numbers
	Step   float64 // between major ticks; 0 for a round one
}

// at returns where a value lies, 0 at Lo and 1 at Hi. On an axis of one value,
// of a cut where nothing shines, say, all lies at Lo.
func (a axis) at(v float64) float64 {
	if a.Hi == a.Lo {
		return 0
	}
	if a.Log {
		return math.Log(v/a.Lo) / math.Log(a.Hi/a.Lo)
	}
	return (v - a.Lo) / (a.Hi - a.Lo)
}

type tick struct {
	at    float64 // 0 to 1
	label string
}

// ticks returns the major ticks, about n, with labels, the minor ones, and
// the power of ten that labels leave to the title.
func (a axis) ticks(n int) (major []tick, minor []float64, power int) {
	if a.Log {
		major, minor = a.logTicks(n)
		return major, minor, 0
	}
	lo, hi := min(a.Lo, a.Hi), max(a.Lo, a.Hi)
	if largest := max(math.Abs(lo), math.Abs(hi)); largest > 0 && (largest >= 1e4 || largest < 1e-2) {
		power = int(math.Floor(math.Log10(largest)))
	}
	unit := math.Pow(10, float64(power))
	values, decimals := ink.Ticks(lo/unit, hi/unit, n)
	if a.Step > 0 {
		values = nil
		for v := a.Step * math.Ceil(lo/a.Step); v <= hi; v += a.Step {
			values = append(values, v/unit)
		}
	}
	for _, v := range values {
		major = append(major, tick{a.at(v * unit), ink.Decimal(v, decimals)})
	}
	if len(values) < 2 {
		return major, nil, power
	}
	step := values[1] - values[0]
	parts := 5
	if lead := step / math.Pow(10, math.Floor(math.Log10(step)+1e-9)); math.Abs(lead-2) < 0.01 {
		parts = 4
	}
	for k := -parts; k <= parts*len(values); k++ {
		v := (values[0] + step*float64(k)/float64(parts)) * unit
		if v >= lo && v <= hi && k%parts != 0 {
			minor = append(minor, a.at(v))
		}
	}
	return major, minor, power
}

// logTicks: powers of ten, every so many of them; within fewer than two
// decades also their multiples by 2 and 5.
func (a axis) logTicks(n int) (major []tick, minor []float64) {
	first, last := int(math.Floor(math.Log10(a.Lo)+1e-9)), int(math.Ceil(math.Log10(a.Hi)-1e-9))
	every := max(1, int(math.Ceil(float64(last-first)/float64(n))))
	const largest = 2 // powers of ten that are written out
	plain := first >= -largest && last <= largest+1
	inside := func(v float64) bool { return v >= a.Lo*(1-1e-9) && v <= a.Hi*(1+1e-9) }
	for e := first; e <= last; e++ {
		for m := 1; m < 10; m++ {
			v := float64(m) * math.Pow(10, float64(e))
			if !inside(v) {
				continue
			}
			few := math.Log10(a.Hi/a.Lo) < 2
			switch {
			case m == 1 && (e-first)%every == 0, few && (m == 2 || m == 5):
				major = append(major, tick{a.at(v), logLabel(m, e, plain)})
			case every == 1:
				minor = append(minor, a.at(v))
			case m == 1:
				minor = append(minor, a.at(v))
			}
		}
	}
	return major, minor
}

// logLabel writes m times ten to the e.
func logLabel(m, e int, plain bool) string {
	if plain {
		return ink.Decimal(float64(m)*math.Pow(10, float64(e)), max(0, -e))
	}
	if m == 1 {
		return "10" + superscript(e)
	}
	return strconv.Itoa(m) + "×10" + superscript(e)
}

var superscripts = strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴", "5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹")

func superscript(n int) string { return superscripts.Replace(strconv.Itoa(n)) }

// title is the axis's title with the power of ten that its numbers lack.
func (a axis) title(power int) string {
	if power == 0 || a.Title == "" {
		return a.Title
	}
	factor := "10" + superscript(power)
	if name, unit, ok := strings.Cut(a.Title, " ("); ok {
		return name + " (" + factor + " " + unit
	}
	return a.Title + " (" + factor + ")"
}

// frame is a box with its four sides; Top and Right may be nil for the ticks
// of the opposite side.
type frame struct {
	X, Y       axis
	Top, Right *axis
}

// Lengths, em.
const (
	majorTick = 0.45
	minorTick = 0.25
	labelGap  = 0.4
	lineStep  = 1.25 // of two lines of words
)

// ticksAlong is how many numbers have room along an axis: they stand one over
// another along an upright one.
func ticksAlong(length, em float64, horizontal bool) int {
	const most = 8 // taste
	room := 2.8 * em
	if horizontal {
		room = 4.2 * em
	}
	return min(max(2, int(length/room)), most)
}

// room returns how much the frame needs around a box of that size, mm.
func (f frame) room(st style, width, height float64) (l, t, r, b float64) {
	wide := func(a axis) float64 {
		if a.Bare {
			return 0.6 * st.em
		}
		major, _, _ := a.ticks(ticksAlong(height, st.em, false))
		widest := 0.
		for _, m := range major {
			widest = max(widest, textWidth(m.label, st.em))
		}
		widest += labelGap * st.em
		if a.Title != "" {
			widest += lineStep * st.em
		}
		return widest + 0.25*st.em
	}
	high := func(a axis) float64 {
		if a.Bare {
			return 0.6 * st.em
		}
		h := (labelGap + capHeight) * st.em
		if a.Title != "" {
			h += lineStep * st.em
		}
		return h + 0.35*st.em
	}
	l, b = wide(f.Y), high(f.X)
	t, r = 0.6*st.em, 1.2*st.em // a label's half may stick out
	if f.Top != nil {
		t = high(*f.Top)
	}
	if f.Right != nil {
		r = wide(*f.Right)
	}
	return l, t, r, b
}

// draw draws box, ticks inward on four sides, numbers and titles.
func (f frame) draw(sheet *Sheet, box rect, st style, tickColour *overTicks) {
	p := pen{Width: thinLine, Colour: st.ink}
	side := func(a axis, horizontal, far, label bool) {
		length := box.width()
		if !horizontal {
			length = box.height()
		}
		major, minor, power := a.ticks(ticksAlong(length, st.em, horizontal))
		mark := func(at, size float64) {
			from, to := point{box.Left + at*box.width(), box.Bottom}, point{box.Left + at*box.width(), box.Bottom - size*st.em}
			if far {
				from, to = point{from.X, box.Top}, point{from.X, box.Top + size*st.em}
			}
			if !horizontal {
				y := box.Bottom - at*box.height()
				from, to = point{box.Left, y}, point{box.Left + size*st.em, y}
				if far {
					from, to = point{box.Right, y}, point{box.Right - size*st.em, y}
				}
			}
			if tickColour != nil {
				sheet.stroke(pen{Width: thinLine + 0.16, Colour: overEdge}, []point{from, to})
				sheet.stroke(pen{Width: thinLine, Colour: overInk}, []point{from, to})
				return
			}
			sheet.stroke(p, []point{from, to})
		}
		const corner = 1e-3 // no tick on the frame itself
		for _, at := range minor {
			if at > corner && at < 1-corner {
				mark(at, minorTick)
			}
		}
		widest := 0.
		for _, m := range major {
			if m.at > corner && m.at < 1-corner {
				mark(m.at, majorTick)
			}
			if !label || a.Bare {
				continue
			}
			w := words{Text: m.label, Size: st.em, Colour: st.ink, Align: centre}
			widest = max(widest, textWidth(m.label, st.em))
			switch {
			case horizontal && far:
				w.At = point{box.Left + m.at*box.width(), box.Top - labelGap*st.em}
			case horizontal:
				w.At = point{box.Left + m.at*box.width(), box.Bottom + (labelGap+capHeight)*st.em}
			case far:
				w.At, w.Align = point{box.Right + labelGap*st.em, box.Bottom - m.at*box.height() + capHeight/2*st.em}, left
			default:
				w.At, w.Align = point{box.Left - labelGap*st.em, box.Bottom - m.at*box.height() + capHeight/2*st.em}, right
			}
			sheet.write(w)
		}
		if !label || a.Title == "" || a.Bare {
			return
		}
		w := words{Text: a.title(power), Size: st.em, Colour: st.ink, Align: centre, Upright: !horizontal}
		switch {
		case horizontal && far:
			w.At = point{(box.Left + box.Right) / 2, box.Top - (labelGap+lineStep)*st.em}
		case horizontal:
			w.At = point{(box.Left + box.Right) / 2, box.Bottom + (labelGap+capHeight+lineStep)*st.em}
		case far:
			w.At = point{box.Right + 2*labelGap*st.em + widest + 0.65*st.em, (box.Top + box.Bottom) / 2}
		default:
			w.At = point{box.Left - 2*labelGap*st.em - widest - 0.15*st.em, (box.Top + box.Bottom) / 2}
		}
		sheet.write(w)
	}
	side(f.X, true, false, true)
	side(f.Y, false, false, true)
	if f.Top != nil {
		side(*f.Top, true, true, true)
	} else {
		side(f.X, true, true, false)
	}
	if f.Right != nil {
		side(*f.Right, false, true, true)
	} else {
		side(f.Y, false, true, false)
	}
	sheet.stroke(p, box.corners())
}

// overTicks says that ticks lie on a picture.
type overTicks struct{}
