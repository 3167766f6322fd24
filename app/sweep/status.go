package sweep

// Count is how many cases are in each state.
type Count map[State]int

// Survey returns the state of every case as it is now, with its record if it
// has one. Quick is told from the records alone, without reading the cases'
// files again.
func Survey(dir string, m *Manifest, quick bool) ([]Record, Count) {
	c := viewClaims(dir)
	records := make([]Record, len(m.Cases))
	count := Count{}
	for k := range m.Cases {
		name := m.Cases[k].Name
		document, _ := m.Document(k) // a case that is no right scene fails, and its record says so
		of := m.digest(k, document)
		read := readRecord
		if quick {
			read = glanceRecord
		}
		record, valid := read(dir, name, of)
		switch {
		case c.busy(name):
			record = Record{Case: name, Of: of, State: Running}
		case !valid:
			record = Record{Case: name, Of: of, State: Waiting}
		}
		records[k] = record
		count[record.State]++
	}
	return records, count
}

// Reasons returns why cases failed, each reason once, with how many cases
// share it and the first of them, in the order of the cases.
func Reasons(records []Record) []Reason {
	var reasons []Reason
	at := map[string]int{}
	for _, r := range records {
		if r.State != Failed {
			continue
		}
		k, known := at[r.Reason]
		if !known {
			k = len(reasons)
			at[r.Reason] = k
			reasons = append(reasons, Reason{Text: r.Reason, First: r.Case})
		}
		reasons[k].Cases++
	}
	return reasons
}

// Reason is why cases failed.
type Reason struct {
	Text  string `json:"reason"`
	Cases int    `json:"cases"`
	First string `json:"first"`
}
