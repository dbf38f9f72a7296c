package unit

// common gathers the arguments of a call that share its unit.
type common struct {
	members []member
	agreed  value
}

// member is one of them; the receiver of a method is first and decides.
type member struct {
	argument
	where    place
	receiver bool
}

// add adds an argument.
func (c *common) add(a argument, where place, receiver bool) {
	c.members = append(c.members, member{a, where, receiver})
}

// led tells whether a receiver decides.
func (c *common) led() bool { return len(c.members) > 0 && c.members[0].receiver }

// leader gives the member whose unit the others must have: the receiver, else the first with a unit, else the first
// plain number.
func (c *common) leader() *member {
	var plain *member
	for i := range c.members {
		m := &c.members[i]
		switch {
		case m.kind != known:
		case m.receiver || m.dim != Number:
			return m
		case plain == nil:
			plain = m
		}
	}
	return plain
}

// agree brings the members of a call together and refuses those in another unit.
func (in *inference) agree(c *common) {
	lead := c.leader()
	if lead == nil {
		c.agreed = lost
		for i, m := range c.members {
			if m.kind == untraced {
				c.agreed = lost
				return
			}
			if i == 0 || c.agreed.kind > m.kind {
				c.agreed = m.value.element()
			}
		}
		return
	}
	c.agreed = lead.value.element()
	for i := range c.members {
		m := &c.members[i]
		if m == lead || m.kind != known || m.dim == lead.dim {
			continue
		}
		if m.dim == Number && (in.bare[lead.dim] || m.table) {
			continue
		}
		text := m.where.what + " wants " + in.word(lead.quantity)
		if in.final {
			text += " like " + in.source(lead.expr) + "; "
			if m.dim == Number {
				text += in.bareHint(m.expr, lead.quantity)
			} else {
				text += in.source(m.expr) + " is in " + in.word(m.quantity) + in.pointHint(m.dim, lead.dim)
			}
		}
		in.refuse(m.expr, text)
	}
}

// result gives the unit of the call.
func (c *common) result() value { return c.agreed }
