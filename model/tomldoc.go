package model

import (
	"errors"
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

// recover reports a syntax error and gives the offset to read on from: the line
// after it.
func (d *tomlDoc) recover(err error) int {
	at, message := d.base, err.Error()
	var place *unstable.ParserError
	if errors.As(err, &place) {
		at = d.base + offsetIn(d.data[d.base:], place.Highlight)
		message = place.Message
	}
	line, _ := d.src.position(min(at, len(d.src.text)-1))
	d.syntaxError(at, message)
	for i := d.read + 1; i <= line; i++ {
		d.damage(at, strings.TrimSpace(d.src.line(i)))
	}
	d.read = line
	return max(d.src.after(at), d.base+1)
}

// syntaxError words the library's message.
func (d *tomlDoc) syntaxError(at int, message string) {
	end := at >= len(d.data) || d.data[at] == '\n' || d.data[at] == '\r' || d.data[at] == '#'
	switch {
	case end && strings.Contains(message, "start of value"):
		d.errorf(at, syntaxHint(message), "a value is missing here")
	case strings.Contains(message, "cannot have new lines"):
		d.errorf(at, syntaxHint(message), "the text in quotes is not closed")
	default:
		d.errorf(at, syntaxHint(message), "this is not TOML: %s", message)
	}
}

// damage notes what a line that cannot be read may have held: a header, or a key
// of the current table.
func (d *tomlDoc) damage(at int, line string) {
	if line == "" || line[0] == '#' {
		return
	}
	if strings.HasPrefix(line, "[") {
		d.lostHeader = true
		d.current = newTable(at, headerTable)
	}
	d.current.damaged = true
	key, _, found := strings.Cut(line, "=")
	key = strings.Trim(strings.TrimSpace(key), `"'`)
	if found && isIdentifier(key) {
		d.current.lost = append(d.current.lost, key)
		return
	}
	d.current.lostKeys = true
}

// offsetIn gives the offset of a sub-slice in data, or the end of data.
func offsetIn(data, part []byte) int {
	offset := cap(data) - cap(part)
	if offset < 0 || offset > len(data) {
		return len(data)
	}
	return offset
}

// syntaxHint says what to type for the commonest slips.
func syntaxHint(message string) string {
	switch {
	case strings.Contains(message, "strings must be quoted"), strings.Contains(message, "at start of value"), strings.Contains(message, "expected keyword"):
		return `a value is a number, true, false, a text in "quotes" or a { table }`
	case strings.Contains(message, "new lines"), strings.Contains(message, "unterminated"):
		return `close the text with " on the line where it begins`
	case strings.Contains(message, "after key"):
		return "write: key = value"
	case strings.Contains(message, "start of key"):
		return "write: key = value, or a header such as [species]; a comment begins with #"
	case strings.Contains(message, "table name"):
		return "close the header: [species], [constants], [[reaction]], [core.NAME]"
	case strings.Contains(message, "inline table"):
		return "close the table with } and put commas between its entries"
	case strings.Contains(message, "decimal point"):
		return "write 0.5 for .5 and 1.0 for 1."
	case strings.Contains(message, "leading zero"):
		return "leave out the zeros at the front"
	case strings.Contains(message, "expected newline"):
		return "one entry a line; a comment begins with #"
	}
	return ""
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

// assign puts a value under a key, whose dots make tables on the way.
func (d *tomlDoc) assign(t *tomlTable, path []keyPart, v tomlValue) {
	last := path[len(path)-1]
	for _, part := range path[:len(path)-1] {
		next := d.descend(t, part, dottedTable)
		if next == nil {
			return
		}
		t = next
	}
	if old := t.get(last.name); old != nil {
		d.errorf(last.at, "keep one of the two", "%q is given twice; first on line %d", last.name, d.lineOf(old.at))
		return
	}
	t.put(tomlEntry{last.name, last.at, v})
}

// descend gives the table under a part of a path, made if need be.
func (d *tomlDoc) descend(t *tomlTable, part keyPart, origin tomlOrigin) *tomlTable {
	e := t.get(part.name)
	if e == nil {
		next := newTable(part.at, origin)
		t.put(tomlEntry{part.name, part.at, tomlValue{kind: unstable.Table, at: part.at, table: next}})
		return next
	}
	if e.value.kind == unstable.ArrayTable && origin == impliedTable {
		return e.value.items[len(e.value.items)-1].table
	}
	if next := e.value.table; next != nil && next.origin != inlineTable {
		return next
	}
	d.errorf(part.at, "", "%q on line %d is %s already; nothing can be added to it here", part.name, d.lineOf(e.at), e.value.valueKind())
	return nil
}

// parent gives the table that holds the last part of a header's path.
func (d *tomlDoc) parent(path []keyPart) *tomlTable {
	t := d.root
	for _, part := range path[:len(path)-1] {
		if t = d.descend(t, part, impliedTable); t == nil {
			return nil
		}
	}
	return t
}

// openTable enters [path].
func (d *tomlDoc) openTable(path []keyPart) {
	last := path[len(path)-1]
	d.current = newTable(last.at, headerTable)
	t := d.parent(path)
	if t == nil {
		return
	}
	e := t.get(last.name)
	switch {
	case e == nil:
		t.put(tomlEntry{last.name, last.at, tomlValue{kind: unstable.Table, at: last.at, table: d.current}})
	case e.value.table == nil || e.value.table.origin == inlineTable:
		d.errorf(last.at, oneHeaderHint(last.name), "%q is given twice; first on line %d", last.name, d.lineOf(e.at))
	case e.value.table.origin == impliedTable:
		e.value.table.origin = headerTable
		d.current = e.value.table
	default:
		d.errorf(last.at, oneHeaderHint(last.name), "table [%s] is given twice; first on line %d", last.name, d.lineOf(e.at))
		d.repeated(e, last)
	}
}

// repeated reads the entries under a header that is given twice: a second
// [reaction] as another reaction, any other into the first table.
func (d *tomlDoc) repeated(e *tomlEntry, last keyPart) {
	if last.name != "reaction" {
		d.current = e.value.table
		return
	}
	e.value.items = append(e.value.items, tomlValue{kind: unstable.Table, at: last.at, table: d.current})
}

func oneHeaderHint(name string) string {
	if name == "reaction" {
		return "begin every reaction with [[reaction]], in two brackets"
	}
	return "put all of its entries under one header"
}

// openItem enters a new item of [[path]].
func (d *tomlDoc) openItem(path []keyPart) {
	last := path[len(path)-1]
	d.current = newTable(last.at, headerTable)
	t := d.parent(path)
	if t == nil {
		return
	}
	item := tomlValue{kind: unstable.Table, at: last.at, table: d.current}
	e := t.get(last.name)
	switch {
	case e == nil:
		list := tomlValue{kind: unstable.ArrayTable, at: last.at, items: []tomlValue{item}}
		t.put(tomlEntry{last.name, last.at, list})
	case e.value.kind == unstable.ArrayTable:
		e.value.items = append(e.value.items, item)
	case last.name == "reaction" && e.value.kind == unstable.Table:
		e.value.items = append(e.value.items, item) // [reaction] came first, which is reported
	default:
		d.errorf(last.at, "", "%q on line %d is %s already, so [[%s]] cannot follow", last.name, d.lineOf(e.at), e.value.valueKind(), last.name)
	}
}
