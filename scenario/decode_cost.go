package scenario

import (
	"cmp"
	"fmt"
	"math"
	"strings"

	"quietslope/scenario/fault"
)

// needMoney refuses a sum in a study that does not say how sums are added up.
func (d *decoder) needMoney(v *value, what string) {
	if !v.given || v.bad || d.noMoney {
		return
	}
	d.noMoney = true
	d.add(v.place, "%s needs a currency and the years over which it counts; give money: {currency: EUR, horizon: 50 y, discount_rate: 3 %%, prices_of: 2026, contingency: 20 %%} with your own numbers", what)
}

// optionCost is the cost of an option of the file, for those below that take it.
type optionCost struct {
	name  string
	given bool
	from  []string // the options that it was taken from itself
	bad   bool     // reported
	cost  Cost     // where it is the option's own
}

// costKeys are the sums of a cost, and where they go.
var costKeys = []struct {
	key string
	of  func(*Cost) *float64
}{
	{"capital", func(c *Cost) *float64 { return &c.Capital }},
	{"per_metre", func(c *Cost) *float64 { return &c.PerMetre }},
	{"per_year", func(c *Cost) *float64 { return &c.PerYear }},
	{"per_flush", func(c *Cost) *float64 { return &c.PerFlush }},
}

// cost reads what an option costs: its own sums, or those of options above. All options that a list makes have the cost of
// the list, and stand for one option to those below.
func (d *decoder) cost(s *Study, o *Option, b *blockValue) {
	v := b.get("cost")
	here := optionCost{name: cmp.Or(o.list, o.Name), given: v.given, bad: v.bad}
	if v.block != nil {
		d.costBlock(s, o, &here, v)
	}
	if n := len(d.costs); n == 0 || d.costs[n-1].name != here.name {
		d.costs = append(d.costs, here)
	}
}

// costBlock reads a cost that is given.
func (d *decoder) costBlock(s *Study, o *Option, here *optionCost, v *value) {
	d.needMoney(v, "a cost")
	b := v.block
	like, life := b.get("like"), b.get("life")
	if b.empty {
		here.bad = true
		d.add(v.place, "the cost is empty; give capital, per_metre, per_year or per_flush, or delete the key: an option without a cost has none in the tables")
		return
	}
	if like.given {
		here.from, here.bad = like.texts, here.bad || like.bad
		if !d.takenCosts(o, here, like) {
			here.bad = true
			return
		}
	} else {
		o.Costs = []Cost{{Life: math.Inf(1)}}
		if life.given && !life.bad && !b.get("capital").given && !b.get("per_metre").given {
			d.add(life.place, "the life says when capital and metres are paid again, and neither is given; give capital, or delete the key")
		}
	}
	switch c := &o.Costs[0]; {
	case len(o.Costs) == 1:
		for _, k := range costKeys {
			if own := b.get(k.key); own.given && !own.bad {
				*k.of(c) = own.num
			}
		}
		if life.given && !life.bad {
			c.Life = yearsOf(life.num)
		}
		d.drainsOf(c, o, b)
		here.cost = *c
	default:
		for _, key := range b.order {
			if key != "like" {
				d.add(b.get(key).place, "this has no place beside a like of several names, whose costs are added up part by part; delete it, or give it in an option of its own and name that too")
				break
			}
		}
	}
	for i := range o.Costs {
		d.checkCost(s, o, &o.Costs[i], b, v.place)
	}
	o.renewDrains()
}

// renewDrains tells the drains of an option that clog when they are paid for anew: by the cost of their measure, or by the
// only cost of the option.
func (o *Option) renewDrains() {
	for i := range o.Measures {
		m := &o.Measures[i]
		decline := m.decline()
		for _, c := range o.Costs {
			if decline != nil && (c.Drains == m.Key || len(o.Costs) == 1) && c.Capital+c.PerMetre > 0 && !math.IsInf(c.Life, 1) {
				decline.Renewed = max(decline.Renewed, c.Life) // of several parts the longest, to be on the safe side
			}
		}
	}
}

// takenCosts puts together the costs that an option takes from others; false where one of them cannot be had.
func (d *decoder) takenCosts(o *Option, here *optionCost, like *value) bool {
	if like.bad {
		return false
	}
	for i, name := range like.texts {
		if indexOfName(like.texts[:i], name) >= 0 {
			d.add(like.place, "%s stands twice in this list, and would be paid twice; keep one of them", quoted(name))
			return false
		}
		c := d.costOf(here.name, name, like.place)
		if c == nil {
			return false
		}
		o.Costs = append(o.Costs, *c)
	}
	return true
}

// drainsOf finds the drains that a cost per metre or per flush is for: those that it was for where it was taken from, or the
// only ones of the option.
func (d *decoder) drainsOf(c *Cost, o *Option, b *blockValue) {
	perMetre, perFlush := b.get("per_metre"), b.get("per_flush")
	if c.Drains != "" && (o.drains(c.Drains) != nil || !perMetre.given && !perFlush.given) {
		return
	}
	c.Drains = ""
	for _, m := range o.Measures {
		if m.Trench == nil && m.Bored == nil {
			continue
		}
		if c.Drains != "" && (c.PerMetre > 0 || c.PerFlush > 0) {
			at := perMetre
			if !at.given {
				at = perFlush
			}
			d.add(at.place, "the option has trench and bored drains, and the cost does not say of which; write their costs in options of their own, and here cost: {like: [A, B]}")
			c.PerMetre, c.PerFlush = 0, 0
		}
		c.Drains = m.Key
	}
}

// costOf is the cost that an option takes from one above; nil, and a problem, where it cannot be had.
func (d *decoder) costOf(own, name string, at Place) *Cost {
	var above []string
	for i := range d.costs {
		c := &d.costs[i]
		if sameName(c.name, own) {
			continue
		}
		above = append(above, c.name)
		switch {
		case !sameName(c.name, name):
			continue
		case c.bad: // reported
		case !c.given:
			d.add(at, "the option %s has no cost; %s", quoted(name), d.havingCost(own))
		case c.from != nil:
			var from []string
			for _, f := range c.from {
				from = append(from, listText(f))
			}
			d.add(at, "%s takes its cost from another option itself; name %s in its place", quoted(name), fault.Words(from, "and"))
		default:
			return &c.cost
		}
		return nil
	}
	if several := d.namesIn(name); len(several) > 1 {
		d.add(at, "several options stand in a list; write [%s]", strings.Join(several, ", "))
		return nil
	}
	var listed string // the list that makes an option of that name
	for _, list := range above {
		if strings.HasPrefix(foldKey(name), foldKey(list)+", ") {
			listed = list
		}
	}
	switch near := fault.Nearest(name, above); {
	case sameName(name, own):
		d.add(at, "this is the option itself; %s", d.havingCost(own))
	case indexOfName(d.named, name) >= 0:
		d.add(at, "the option %s stands below; only an option above can be named, so change their order", quoted(name))
	case listed != "":
		d.add(at, "no option above is named %s; name the list, %s, whose cost each of its options has", quoted(name), quoted(listed))
	case near != "":
		d.add(at, "no option above is named %s; did you mean %s?", quoted(name), quoted(near))
	default:
		d.add(at, "no option above is named %s; %s", quoted(name), d.havingCost(own))
	}
	return nil
}

// namesIn are the options that a text such as "trenches and channels" names, as they stand in a list; nil where a part of it
// names none.
func (d *decoder) namesIn(text string) []string {
	var names []string
	for _, part := range strings.Split(strings.NewReplacer(" and ", ",", "+", ",", "&", ",", ";", ",").Replace(text), ",") {
		part = strings.TrimSpace(part)
		if indexOfName(d.named, part) < 0 {
			return nil
		}
		names = append(names, listText(part))
	}
	return names
}

// havingCost lists the options above that have a cost of their own.
func (d *decoder) havingCost(own string) string {
	var names []string
	for i := range d.costs {
		if c := &d.costs[i]; c.given && c.from == nil && !sameName(c.name, own) {
			names = append(names, c.name)
		}
	}
	switch len(names) {
	case 0:
		return "no option above has a cost of its own, so write the sums out"
	case 1:
		return "the only one above that has a cost of its own is " + quoted(names[0])
	}
	return "those above that have a cost of their own are " + quotedWords(names, "and")
}

// checkCost refuses a cost per metre or per flush that has nothing to be multiplied by in this option.
func (d *decoder) checkCost(s *Study, o *Option, c *Cost, b *blockValue, place Place) {
	if like := b.get("like"); like.given {
		place = like.place
	}
	// Where a sum stands, and what to do about one that is not wanted.
	of := func(key, instead string) (Place, string) {
		if v := b.get(key); v.given {
			return v.place, instead
		}
		if len(o.Costs) > 1 {
			return place, "take it out of like, or write the sums out"
		}
		return place, fmt.Sprintf("write %s: 0 beside like, or write the sums out", key)
	}
	m := o.drains(c.Drains)
	if c.PerMetre > 0 {
		at, whole := of("per_metre", "give the whole sum as capital")
		switch {
		case c.Drains == "":
			d.add(at, "the option has neither trench nor bored drains, so there are no metres to pay for; %s", whole)
		case m == nil:
			d.add(at, "the cost taken over is per metre of %s, and this option has none; %s", c.Drains, whole)
		case m.Trench != nil && m.Trench.Spacing == 0 && m.Trench.Rate > 0:
			d.add(at, "the trenches are given by a rate, so their metres are not known; give the spacing, or %s", whole)
		case m.Trench != nil && s.Site.PlanArea == 0 && !d.noPlanArea:
			d.noPlanArea = true
			d.add(at, "the metres of trench are the plan area divided by the spacing; give site.plan_area, such as 12000 m2")
		case m.Bored != nil && (m.Bored.Number == 0 || m.Bored.Length == 0):
			d.add(at, "the metres of bored drains are their number times their length; give number and length of bored_drains")
		}
	}
	if c.PerFlush > 0 {
		at, yearly := of("per_flush", "give the sum as per_year")
		switch {
		case c.Drains == "":
			d.add(at, "the option has neither trench nor bored drains, so there is nothing to flush; %s", yearly)
		case m == nil:
			d.add(at, "the cost taken over is per flush of %s, and this option has none; %s", c.Drains, yearly)
		case m.decline() == nil || math.IsInf(m.decline().Every, 1):
			d.add(at, "the drains are never flushed, as far as the study says; give flushed_every in %s.decline, or %s", c.Drains, yearly)
		}
	}
}

// drains is the measure of an option with a key, nil where it has none.
func (o *Option) drains(key string) *Measure {
	for i := range o.Measures {
		if o.Measures[i].Key == key {
			return &o.Measures[i]
		}
	}
	return nil
}

// decline is how the drains of a measure clog; nil for never, and for any other measure.
func (m *Measure) decline() *Decline {
	switch {
	case m.Trench != nil:
		return m.Trench.Decline
	case m.Bored != nil:
		return m.Bored.Decline
	}
	return nil
}
