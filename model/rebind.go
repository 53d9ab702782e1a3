package model

// Rebind gives the network with constants replaced where set names them, and copies
// by copies if it is positive. Errors are those of Draft.Bind.
func (n *Network) Rebind(copies float64, set map[string]float64) (*Network, error) {
	return n.Draft().Bind(copies, set)
}

// Draft gives the network's design with its constants free again, at the values that
// they are bound to.
func (n *Network) Draft() *Draft {
	d := &Draft{
		Title: n.Title, TimeUnit: n.TimeUnit, Generation: n.Generation, Copies: n.Copies,
		Species: n.Species, Constants: n.Constants, Readout: n.Readout, Declared: n.Declared,
		File: n.File, Text: n.Text, Digest: n.Digest, Notes: n.Notes,
	}
	for i := range n.Reactions {
		r := &n.Reactions[i]
		dr := DraftReaction{Name: r.Name, Uses: r.Uses, Needs: r.Needs, Makes: r.Makes}
		if r.MassAction {
			dr.MassAction = r.freeCoefficient()
		} else {
			dr.Rate = r.Free
		}
		d.Reactions = append(d.Reactions, dr)
	}
	return d
}

// freeCoefficient is the tree of a mass-action law's constant: its law is the product
// of that with one factor a reactant.
func (r *Reaction) freeCoefficient() *Node {
	tree := r.Free
	for range r.Reactants {
		tree = tree.Args[0]
	}
	return tree
}
