package scenario

import (
	"math"

	"quietslope/scenario/fault"
)

// needMoney refuses a sum in a study that does not say how sums are added up.
func (d *decoder) needMoney(s *Study, v *value, what string) {
	if !v.given || v.bad || s.Money != nil || d.noMoney || s.hasKey("money") {
		return
	}
	d.noMoney = true
	d.add(v.place, "%s needs a currency and the years over which it counts; give money: {currency: EUR, horizon: 50 y, discount_rate: 3 %%, prices_of: 2026, contingency: 20 %%} with your own numbers", what)
}

// ownCost is the cost of an option of the file that did not take it from another.
type ownCost struct {
	name string
	cost Cost
	bad  bool // reported
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

// cost reads what an option costs: its own sums, or those of options above.
func (d *decoder) cost(s *Study, o *Option, b *blockValue) {
	v := b.get("cost")
	if v.block == nil {
		return
	}
	d.needMoney(s, v, "a cost")
	if v.block.empty {
		d.add(v.place, "the cost is empty; give capital, per_metre, per_year or per_flush, or delete the key: an option without a cost has none in the tables")
		return
	}
	life := v.block.get("life")
	like := v.block.get("like")
	if !like.given {
		c := Cost{Life: math.Inf(1)}
		d.ownSums(&c, v.block, life)
		d.drainsOf(&c, o, v.block)
		o.Costs = []Cost{c}
		d.remember(o, c)
		d.checkCost(s, o, &o.Costs[0], v.block, v.place)
		return
	}
	for _, name := range like.texts {
		if c, ok := d.costOf(o, name, like.place); ok {
			o.Costs = append(o.Costs, c)
		} else {
			o.Costs = nil
			return
		}
	}
	if len(like.texts) == 1 {
		d.ownSums(&o.Costs[0], v.block, life)
	} else {
		for _, key := range v.block.order {
			if key != "like" {
				d.add(v.block.get(key).place, "this has no place beside a like of several names, whose costs are added up part by part; delete it")
				break
			}
		}
	}
	for i := range o.Costs {
		d.checkCost(s, o, &o.Costs[i], v.block, like.place)
	}
}

// ownSums puts the sums that a cost gives itself over those that it has.
func (d *decoder) ownSums(c *Cost, b *blockValue, life *value) {
	for _, k := range costKeys {
		if v := b.get(k.key); v.given && !v.bad {
			*k.of(c) = v.num
		}
	}
	if life.given && !life.bad {
		c.Life = life.num / 365.25
	}
}

// drainsOf finds the drains that a cost per metre or per flush is for.
func (d *decoder) drainsOf(c *Cost, o *Option, b *blockValue) {
	for _, m := range o.Measures {
		if m.Trench == nil && m.Bored == nil {
			continue
		}
		if c.Drains != "" && (c.PerMetre > 0 || c.PerFlush > 0) {
			at := b.get("per_metre")
			if !at.given {
				at = b.get("per_flush")
			}
			d.add(at.place, "the option has trench and bored drains, and the cost does not say of which; write their costs in options of their own, and here cost: {like: [A, B]}")
			c.PerMetre, c.PerFlush = 0, 0
		}
		c.Drains = m.Key
	}
}

// remember keeps the cost of an option for those below that take it. All options of one list have the same.
func (d *decoder) remember(o *Option, c Cost) {
	name := o.list
	if name == "" {
		name = o.Name
	}
	if len(d.costs) == 0 || d.costs[len(d.costs)-1].name != name {
		d.costs = append(d.costs, ownCost{name: name, cost: c})
	}
}

// costOf is the cost of an option above.
func (d *decoder) costOf(o *Option, name string, at Place) (Cost, bool) {
	var known []string
	for _, c := range d.costs {
		if sameName(c.name, name) && !sameName(c.name, o.Name) {
			return c.cost, true
		}
		known = append(known, c.name)
	}
	hint := "no option above has one, so write its sums out"
	if len(known) > 0 {
		hint = "those above that have one of their own are " + quotedWords(known, "and")
	}
	if near := fault.Nearest(name, known); near != "" {
		hint = "did you mean " + quoted(near) + "?"
	}
	d.add(at, "no option above is named %s and has a cost of its own; %s", quoted(name), hint)
	return Cost{}, false
}

// checkCost refuses a cost per metre or per flush that has nothing to be multiplied by in this option.
func (d *decoder) checkCost(s *Study, o *Option, c *Cost, b *blockValue, place Place) {
	at := func(key string) Place {
		if v := b.get(key); v.given {
			return v.place
		}
		return place
	}
	m := o.drains(c.Drains)
	if c.PerMetre > 0 {
		switch {
		case c.Drains == "":
			d.add(at("per_metre"), "the option has neither trench nor bored drains, so there are no metres to pay for; give the whole sum as capital")
		case m == nil:
			d.add(place, "the cost taken over is per metre of %s, and this option has none", c.Drains)
		case m.Trench != nil && m.Trench.Spacing == 0 && m.Trench.Rate > 0:
			d.add(at("per_metre"), "the trenches are given by a rate, so their metres are not known; give the spacing, or the whole sum as capital")
		case m.Trench != nil && s.Site.PlanArea == 0:
			d.add(at("per_metre"), "the metres of trench are the plan area divided by the spacing; give site.plan_area, such as 12000 m2")
		case m.Bored != nil && (m.Bored.Number == 0 || m.Bored.Length == 0):
			d.add(at("per_metre"), "the metres of bored drains are their number times their length; give number and length of bored_drains")
		}
	}
	if c.PerFlush > 0 {
		switch {
		case c.Drains == "":
			d.add(at("per_flush"), "the option has neither trench nor bored drains, so there is nothing to flush; give the sum as per_year")
		case m == nil:
			d.add(place, "the cost taken over is per flush of %s, and this option has none", c.Drains)
		case m.decline() == nil || math.IsInf(m.decline().Every, 1):
			d.add(at("per_flush"), "the drains are never flushed; give %s.decline with flushed_every, or delete per_flush", c.Drains)
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
