package unit

// Kept counts what a checker remembers.
func (c *Checker) Kept() int {
	n := len(c.kept) + len(c.named) + len(c.reads)
	for _, by := range c.reads {
		n += len(by)
	}
	return n
}
