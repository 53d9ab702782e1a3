package model

import (
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

// tomlDoc reads a TOML file into a tree of tables that remembers where
// everything stands, and reads on after an error.
type tomlDoc struct {
	*reporter
	data    []byte
	base    int // offset in the file at which the parser began
	parser  unstable.Parser
	root    *tomlTable
	current *tomlTable
	// lostHeader tells that the header of a table could not be read.
	lostHeader bool
	read       int // the line on which the last entry that was read begins
}

// readTOML gives the file's tree; what is wrong with it goes to the reporter.
func readTOML(r *reporter) *tomlDoc {
	d := &tomlDoc{reporter: r, data: []byte(r.src.text), root: newTable(0, headerTable)}
	d.current = d.root
	for d.base < len(d.data) {
		d.parser.Reset(d.data[d.base:])
		for d.parser.NextExpression() {
			d.expression(d.parser.Expression())
		}
		err := d.parser.Error()
		if err == nil {
			break
		}
		d.base = d.recover(err)
	}
	return d
}

func (d *tomlDoc) expression(n *unstable.Node) {
	keys := d.keys(n.Key())
	d.read = d.lineOf(keys[0].at)
	switch n.Kind {
	case unstable.KeyValue:
		d.assign(d.current, keys, d.value(n))
	case unstable.Table:
		d.openTable(keys)
	case unstable.ArrayTable:
		d.openItem(keys)
	}
}

func (d *tomlDoc) keys(it unstable.Iterator) []keyPart {
	var out []keyPart
	for it.Next() {
		k := it.Node()
		out = append(out, keyPart{string(k.Data), d.base + int(k.Raw.Offset)})
	}
	return out
}

// value gives the value of a key-value node. Lists have no place of their own in
// the parser's tree, so the value's place is found behind the equals sign.
func (d *tomlDoc) value(n *unstable.Node) tomlValue {
	end := 0
	for it := n.Key(); it.Next(); {
		raw := it.Node().Raw
		end = d.base + int(raw.Offset+raw.Length)
	}
	rest := d.src.text[end:]
	after := strings.TrimLeft(rest, " \t")
	after = strings.TrimLeft(strings.TrimPrefix(after, "="), " \t")
	return d.node(n.Value(), len(d.src.text)-len(after))
}

func (d *tomlDoc) node(n *unstable.Node, at int) tomlValue {
	v := tomlValue{kind: n.Kind, at: at}
	switch n.Kind {
	case unstable.Array:
		for it := n.Children(); it.Next(); {
			item := it.Node()
			place := at
			if item.Kind != unstable.Array {
				place = d.base + int(item.Raw.Offset)
			}
			v.items = append(v.items, d.node(item, place))
		}
	case unstable.InlineTable:
		v.table = newTable(at, inlineTable)
		for it := n.Children(); it.Next(); {
			d.assign(v.table, d.keys(it.Node().Key()), d.value(it.Node()))
		}
	default:
		v.text, v.raw = string(n.Data), string(d.parser.Raw(n.Raw))
	}
	return v
}
