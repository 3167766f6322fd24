package measure

import "slices"

// smallest returns the n elements for which key is smallest, nearest first.
func smallest[T any](all []T, n int, key func(T) float64) []T {
	type keyed struct {
		key float64
		k   int
	}
	keys := make([]keyed, len(all))
	for k, x := range all {
		keys[k] = keyed{key(x), k}
	}
	slices.SortFunc(keys, func(a, b keyed) int {
		switch {
		case a.key < b.key:
			return -1
		case a.key > b.key:
			return 1
		}
		return a.k - b.k
	})
	n = min(n, len(all))
	found := make([]T, n)
	for k := range n {
		found[k] = all[keys[k].k]
	}
	return found
}
