package deterministic

import (
	"fmt"
	"slices"
	"strings"
)

// finish adds cores, absorbing states and warnings.
func (m *Map) finish(o Options) error {
	if err := m.makeCores(o); err != nil {
		return err
	}
	m.markAbsorbing()
	m.variationWarning()
	m.stateWarnings()
	m.searchWarnings()
	if err := m.distinct(); err != nil {
		return err
	}
	if len(m.Cores) == 1 {
		return &OneStateError{m.States[0], speciesNames(m.Network)}
	}
	return nil
}

// markAbsorbing marks the states that are never left: at the lattice point some
// species are absent that no reaction can bring back, and which every other stable
// state has.
func (m *Map) markAbsorbing() {
	for _, a := range m.Network.Absorbing() {
		var inside []int
		for i := range m.Cores {
			if m.absent(m.Cores[i].Start, a.Empty) {
				inside = append(inside, i)
			}
		}
		if len(inside) == 1 {
			m.States[inside[0]].Absorbing = true
		}
	}
	for i := range m.Cores {
		m.States[i].Absorbing = m.States[i].Absorbing || m.nothingFires(m.Cores[i].Start)
	}
}

func (m *Map) absent(counts []int64, species []int) bool {
	return !slices.ContainsFunc(species, func(i int) bool { return counts[i] != 0 })
}

func (m *Map) nothingFires(counts []int64) bool {
	for r := range m.Network.Reactions {
		if len(m.sys.changes[r]) > 0 && m.Network.Propensity(r, counts) != 0 {
			return false
		}
	}
	return true
}

// distinct gives an error where two cores start on one lattice point.
func (m *Map) distinct() error {
	for i := range m.Cores {
		for j := range i {
			if slices.Equal(m.Cores[i].Start, m.Cores[j].Start) {
				return &IndistinctError{m.Cores[j].State, m.Cores[i].State, m.Cores[i].Start}
			}
		}
	}
	return nil
}

// fewMolecules is the readout below which linear noise and the rate equations
// are poor guides.
const fewMolecules = 10

func (m *Map) stateWarnings() {
	r := m.Network.Readout
	name := m.Network.Species[r].Name
	for i := range m.States {
		s := &m.States[i]
		kink := ""
		if s.Kind == Degenerate {
			kink = m.kinkAt(s.Amounts)
		}
		switch {
		case kink != "":
			m.warn("%s lies at a kink, and its stability is not told: %s", s.Name, kink)
		case s.Kind == Degenerate:
			m.warn("%s is degenerate: an eigenvalue is 0 to within rounding, so the design sits on a fold or a branch point; move a constant to see which way it falls", s.Name)
		case !s.Kind.Stable():
		case s.Absorbing && s.Molecules[r] > 0:
			m.warn("%s has less than half a molecule, and from its lattice point nothing comes back: %s = %.3g molecules", s.Name, name, s.Molecules[r])
		case s.Molecules[r] > 0 && s.Molecules[r] < fewMolecules:
			m.warn("%s has fewer than %d molecules of %s (%.3g): rate equations and linear noise are rough there", s.Name, fewMolecules, name, s.Molecules[r])
		}
	}
	m.mergingWarnings()
}

// mergingWarnings warns of stable states whose lattice points are within one
// molecule of each other or of a saddle's.
func (m *Map) mergingWarnings() {
	for i := range m.Cores {
		if m.States[i].Kind == Declared {
			continue
		}
		for j := range m.States {
			if j == i || j < i && j < len(m.Cores) || m.States[j].Kind == Declared {
				continue
			}
			if m.within(&m.States[i], &m.States[j]) {
				m.warn("%s and %s are less than one molecule apart: they nearly merge at this copy number", m.States[i].Name, m.States[j].Name)
			}
		}
	}
}

func (m *Map) within(a, b *State) bool {
	for i, v := range a.Molecules {
		if abs(v-b.Molecules[i]) >= 1 {
			return false
		}
	}
	return true
}

func (m *Map) searchWarnings() {
	if slices.Contains(m.Basis, ByFlow) {
		var names []string
		for i, b := range m.Basis {
			if b == ByFlow {
				names = append(names, m.Network.Species[i].Name)
			}
		}
		m.warn("no bound on %s follows from the reactions: searched up to where flows settle", strings.Join(names, ", "))
	}
	if m.Search.Checked && !m.Search.Balanced {
		m.warn("the states' indices do not add up: at least one resting state was missed")
	}
}

// String says how the list of states was found.
func (s Search) String() string {
	if s.Scanned {
		return fmt.Sprintf("the class has one dimension and was searched along it without gaps, in %d pieces", s.Starts)
	}
	text := fmt.Sprintf("multi-start Newton, %d starts and %d flows", s.Starts, s.Flows)
	if s.Balanced {
		text += "; the states' indices add up"
	}
	return text
}

// variationWarning says that constants vary, which nothing here follows.
func (m *Map) variationWarning() {
	var names []string
	for _, i := range m.Network.Varying() {
		names = append(names, m.Network.Constants[i].Name)
	}
	if names != nil {
		m.warn("constants vary (%s): states, cores and basins are those at their medians; a cell's own may lie elsewhere, or be missing", strings.Join(names, ", "))
	}
}
