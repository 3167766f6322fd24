package scenes

import "strings"

// otherSection is what a key of another section must be more alike, in half
// characters. Taste.
const otherSection = 3

// shortest is the least number of characters by which the start of a key is
// recognised. Taste.
const shortest = 3

// nearestKey returns the known key that is most like the name: its name when
// it stands in the same section, else its path.
func nearestKey(in, name string) string {
	best, bestCost := "", 0
	for _, k := range keyTable {
		cost := 2 * editDistance(strings.ToLower(name), strings.ToLower(k.Name))
		if len(name) >= shortest && strings.HasPrefix(k.Name, strings.ToLower(name)) {
			cost = 0 // cut short
		}
		if k.Section != in {
			cost += otherSection
		}
		if best == "" || cost < bestCost {
			best, bestCost = k.Path(), cost
			if k.Section == in {
				best = k.Name
			}
		}
	}
	return best
}

// nearestSection returns the name of the known table most like the name.
func nearestSection(name string) string {
	best, bestCost := "", 0
	for _, s := range sections[1:] {
		cost := editDistance(strings.ToLower(name), s.name)
		if best == "" || cost < bestCost {
			best, bestCost = s.name, cost
		}
	}
	return best
}

// longestName bounds the work spent on an absurdly long key. Taste.
const longestName = 64

// editDistance returns the number of characters to insert, remove or replace
// between a and b, of which the first longestName bytes are compared.
func editDistance(a, b string) int {
	a, b = a[:min(len(a), longestName)], b[:min(len(b), longestName)]
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := diagonal
			if a[i] != b[j] {
				cost++
			}
			diagonal = row[j+1]
			row[j+1] = min(cost, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}

// nearestField returns the key of an inline table that is most like the name.
func nearestField(fields []Key, name string) string {
	best, bestCost := "", 0
	for _, k := range fields {
		cost := editDistance(strings.ToLower(name), k.Name)
		if best == "" || cost < bestCost {
			best, bestCost = k.Name, cost
		}
	}
	return best
}
