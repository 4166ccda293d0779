package syntax

import "strings"

// String prints the card so that it reads back the same: one blank between items.
func (c *ElementCard) String() string { return printCard(c.Name.String(), c.Items) }

// String prints the card so that it reads back the same.
func (c *DirectiveCard) String() string { return printCard(c.Keyword, c.Items) }

func printCard(head string, items []*Item) string {
	words := []string{head}
	for _, i := range items {
		words = append(words, i.String())
	}
	return strings.Join(words, " ")
}

// String prints one item.
func (i *Item) String() string {
	switch {
	case i.Comma:
		return ","
	case i.Equals:
		return "="
	case i.Group != nil:
		return i.Group.String()
	}
	return i.Assign.String()
}

// String prints the list in brackets.
func (g *Group) String() string {
	words := make([]string, len(g.Items))
	for k, i := range g.Items {
		words[k] = i.String()
	}
	return "( " + strings.Join(words, " ") + " )"
}

// String prints the word or assignment.
func (a *Assign) String() string {
	if a.Value == nil {
		return a.Key.String()
	}
	if a.Value.Group != nil {
		return a.Key.String() + "=" + a.Value.Group.String()
	}
	return a.Key.String() + "=" + a.Value.Atom.String()
}

// String prints the atom with its marks.
func (a *Atom) String() string { return a.Word + a.Quoted + a.Braced }
