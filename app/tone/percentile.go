package tone

import "math"

// counted says which finite values a percentile counts besides positive ones.
type counted struct{ zeros, negative bool }

// The selection below is a radix sort that follows only the wanted ranks: it
// reads the values three times, orders nothing and allocates nothing. Keys of
// 32 bits are cut into digits of 11, 11 and 10 bits.
const (
	digitBits = 11
	digits    = 1 << digitBits
	topShift  = 32 - digitBits
	midShift  = topShift - digitBits
	lowBits   = midShift
)

// selectPercentiles returns the values at two percentiles in [0, 100] of the
// values counted, by nearest rank: the smallest one that has at least that
// part of all at or below it. So the result is always one of the values, and
// their order does not matter. some is false if none is counted.
func selectPercentiles(values []float32, which counted, lowPercent, highPercent float64) (lo, hi float64, some bool) {
	var top [digits]int
	var n int
	for _, v := range values {
		if key, ok := which.key(v); ok {
			top[key>>topShift]++
			n++
		}
	}
	if n == 0 {
		return 0, 0, false
	}
	a, b := search{rank: rankOf(lowPercent, n)}, search{rank: rankOf(highPercent, n)}
	a.follow(top[:])
	b.follow(top[:])

	const digitMask = digits - 1
	var midA, midB [digits]int
	for _, v := range values {
		if key, ok := which.key(v); ok {
			if key>>topShift == a.prefix {
				midA[key>>midShift&digitMask]++
			}
			if key>>topShift == b.prefix {
				midB[key>>midShift&digitMask]++
			}
		}
	}
	a.follow(midA[:])
	b.follow(midB[:])

	const lowMask = 1<<lowBits - 1
	var lowA, lowB [1 << lowBits]int
	for _, v := range values {
		if key, ok := which.key(v); ok {
			if key>>midShift == a.prefix {
				lowA[key&lowMask]++
			}
			if key>>midShift == b.prefix {
				lowB[key&lowMask]++
			}
		}
	}
	a.follow(lowA[:])
	b.follow(lowB[:])
	return valueOf(a.prefix), valueOf(b.prefix), true
}

// search is the hunt for one rank: the digits of its key found so far, and
// how many keys that share them lie below it.
type search struct {
	prefix uint32
	rank   int
}

// follow adds the digit under which the rank falls.
func (s *search) follow(counts []int) {
	var digit uint32
	for s.rank >= counts[digit] {
		s.rank -= counts[digit]
		digit++
	}
	s.prefix = s.prefix*uint32(len(counts)) + digit
}

// rankOf returns the 0-based nearest rank of a percentile among n values.
func rankOf(percent float64, n int) int {
	rank := int(math.Ceil(percent*float64(n)/100)) - 1
	return min(max(rank, 0), n-1)
}

const signBit = 1 << 31

// key maps a value to a number that orders as the values do; ok is false for
// values that do not count.
func (c counted) key(v float32) (key uint32, ok bool) {
	const infinity = 0x7f800000 // the bits of +Inf; NaN lies above
	bits := math.Float32bits(v)
	size := bits &^ signBit
	if size >= infinity || size == 0 && !c.zeros {
		return 0, false
	}
	if bits == size || size == 0 { // positive, or either zero
		return size | signBit, true
	}
	return ^bits, c.negative
}

func valueOf(key uint32) float64 {
	if key&signBit != 0 {
		return float64(math.Float32frombits(key &^ signBit))
	}
	return float64(math.Float32frombits(^key))
}
