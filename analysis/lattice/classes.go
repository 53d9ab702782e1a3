package lattice

// classes gives each node the number of its communicating class, in an order
// such that no transition leads to a class of a higher number: Tarjan, SIAM J.
// Comput. 1 (1972) 146, without recursion.
func (c *chain) classes() (class []int32, count int) {
	t := tarjan{
		chain: c, class: make([]int32, c.nodes()),
		index: make([]int32, c.nodes()), low: make([]int32, c.nodes()), at: make([]int, c.nodes()),
	}
	for i := range t.class {
		t.class[i] = -1
	}
	for i := range t.class {
		if t.index[i] == 0 {
			t.visit(int32(i))
		}
	}
	return t.class, t.count
}

type tarjan struct {
	*chain
	class, index, low []int32
	at                []int // the next transition to look at
	stack, path       []int32
	next              int32
	count             int
}

func (t *tarjan) open(i int32) {
	t.next++
	t.index[i], t.low[i], t.at[i] = t.next, t.next, t.first[i]
	t.stack = append(t.stack, i)
	t.path = append(t.path, i)
}

func (t *tarjan) visit(root int32) {
	t.open(root)
	for len(t.path) > 0 {
		i := t.path[len(t.path)-1]
		if t.at[i] < t.first[i+1] {
			j := t.to[t.at[i]]
			t.at[i]++
			if t.index[j] == 0 {
				t.open(j)
			} else if t.class[j] < 0 {
				t.low[i] = min(t.low[i], t.index[j])
			}
			continue
		}
		t.path = t.path[:len(t.path)-1]
		if n := len(t.path); n > 0 {
			t.low[t.path[n-1]] = min(t.low[t.path[n-1]], t.low[i])
		}
		if t.low[i] == t.index[i] {
			t.closeClass(i)
		}
	}
}

func (t *tarjan) closeClass(root int32) {
	for {
		j := t.stack[len(t.stack)-1]
		t.stack = t.stack[:len(t.stack)-1]
		t.class[j] = int32(t.count)
		if j == root {
			break
		}
	}
	t.count++
}

// closed marks the classes that no transition inside the box leaves.
func (c *chain) closed(class []int32, count int) []bool {
	out := make([]bool, count)
	for i := range out {
		out[i] = true
	}
	for i := range class {
		for _, j := range c.successors(i) {
			if class[j] != class[i] {
				out[class[i]] = false
				break
			}
		}
	}
	return out
}
