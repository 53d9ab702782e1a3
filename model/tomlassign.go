package model

import "github.com/pelletier/go-toml/v2/unstable"

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
