package scenario

import (
	"context"
	"fmt"
	"math"
	"slices"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// reason says why there is no answer, and what is to be known of one that is an end of the range. It is "" for any other.
func (z *sizing) reason(found *result.Size) string {
	fromSafe := z.fromSafe(found.Curve)
	safe, unsafe := fromSafe[0], fromSafe[len(fromSafe)-1]
	same := !slices.ContainsFunc(fromSafe, func(p result.SizePoint) bool {
		return stats.Less(p.Figure, safe.Figure) || stats.Less(safe.Figure, p.Figure)
	})
	switch {
	case same && safe.Figure > 0:
		return fmt.Sprintf("The figure is the same at every value of the range, so %s decides nothing here. Size another number.", z.key)
	case found.Target == nil:
		return fmt.Sprintf("The study has no target. Give count.target, such as {%s: %s}, to have the value found.", z.measure.name, targetExample(z.measure.name))
	case found.Answer != nil && found.Beyond != nil:
		return ""
	case found.Answer != nil:
		return "Every value of the range meets the target, so the answer is its end." + z.look(unsafe, saferAbove[z.key], " Look %s %s too.", "")
	case len(found.MeetsAgain) > 0:
		return fmt.Sprintf("The safe end of the range, %s, misses the target, and less safe values meet it: the figure does not fall all the way. Look at the curve, and set the target on another figure.", safe.Text)
	}
	return "No value of the range meets the target." +
		z.look(safe, !saferAbove[z.key], " Look %s %s where such works can be built, or combine measures.", " Combine measures, or choose other works.")
}

// look says to look below or above an end of the range, or something instead where no value beyond it can be.
func (z *sizing) look(end result.SizePoint, below bool, words, instead string) string {
	next, where := 1.01*end.Value, "above"
	if below {
		next, where = 0.99*end.Value, "below"
	}
	next = z.round(next, sizeDigits)
	if _, err := z.with(next); err != nil || next == end.Value {
		return instead
	}
	return fmt.Sprintf(words, where, end.Text)
}

// targetExample is what a target on a measure may be.
func targetExample(measure string) string {
	return targetShape.fields[slices.IndexFunc(targetShape.fields, func(f field) bool { return f.name == measure })].eg
}

// steps works out what each value of the curve has over the next one that is less safe.
func (z *sizing) steps(curve []result.SizePoint) {
	for i := range curve {
		k := i + 1
		if saferAbove[z.key] {
			k = i - 1
		}
		if k < 0 || k == len(curve) {
			continue
		}
		p, next := &curve[i], &curve[k]
		step := &result.SizeStep{Less: next.Figure - p.Figure}
		if !stats.Less(p.Figure, next.Figure) && !stats.Less(next.Figure, p.Figure) {
			step.Less = 0
		}
		if p.Metres != nil && next.Metres != nil && stats.Less(*next.Metres, *p.Metres) {
			per := step.Less / (*p.Metres - *next.Metres) * 100
			step.LessPer100Metres = &per
		}
		if p.PresentValue != nil && next.PresentValue != nil && step.Less > 0 && stats.Less(*next.PresentValue, *p.PresentValue) {
			each := (*p.PresentValue - *next.PresentValue) / step.Less
			step.CostPerLess = &each
		}
		p.Step = step
	}
}

// describe says what the option does with the answer, how its drains stand if they stop, and what is weak about the figures.
// Without an answer it is the safe end of the range that is described.
func (z *sizing) describe(ctx context.Context, found *result.Size) error {
	shown := &z.fromSafe(found.Curve)[0]
	if found.Answer != nil {
		shown = found.Answer
	}
	p, options, err := z.replay(ctx, shown.Value)
	if err != nil {
		return err
	}
	f := &options[0]
	if f.States, err = z.states(ctx, shown.Value, p, options); err != nil {
		return err
	}
	found.Measures, found.DrainsAs = f.Measures, f.DrainsAs
	if found.Answer != nil {
		found.States, found.TimeToEffect = f.States, f.trace.works.timeToEffect()
	}

	whole := z.prepared
	base, err := whole.rowFigures(ctx, whole.works[whole.baseline], whole.cases[0].rows[whole.baseline])
	if err != nil {
		return err
	}
	ws := warnings(p.studyWarnings(options))
	p.actionWarnings(&ws, f, &base)
	if z.condition.Name == AsBuilt {
		if err := p.lawWarnings(ctx, &ws, options); err != nil {
			return err
		}
	}
	if found.Answer != nil {
		p.targetWarnings(&ws, options)
	}
	conversion, err := whole.conversion(ctx)
	if err != nil {
		return err
	}
	conversionWarnings(&ws, conversion)
	p.replayWarnings(&ws, f)
	p.countWarnings(&ws, options)
	z.answerWarnings(&ws, found)
	found.Warnings = slices.DeleteFunc(ws, func(w result.Warning) bool {
		return w.Band != "" && w.Band != found.DecideOn || w.Code == "losses_not_given" // which no sizing needs
	})
	return nil
}

// states are the deciding figures of the option with a value in every state of its drains, whichever it is sized for. It was
// replayed in that one, which need not be its own.
func (z *sizing) states(ctx context.Context, value float64, p *prepared, options []optionFigures) (_ []result.State, err error) {
	if z.drains != nil {
		own := *z
		own.drains = nil
		if p, options, err = own.replay(ctx, value); err != nil {
			return nil, err
		}
	}
	err = p.states(ctx, options, &z.condition, z.resamples)
	return options[0].States, err
}

// answerWarnings add what the reader of the answer and the curve must weigh.
func (z *sizing) answerWarnings(ws *warnings, found *result.Size) {
	at := func(w result.Warning) result.Warning {
		w.Option, w.Band = found.Option, found.DecideOn
		return w
	}
	if t := z.study.Options[z.option].drains("trench_drains"); t != nil && !math.IsNaN(t.Trench.Equivalent) && t.Trench.Equivalent > 0 &&
		(z.key == variedSpacing || z.key == "trench_drains.depth") {
		w := warn("equivalent_depth_fixed")
		w.Option = found.Option
		ws.add(w, "The equivalent_depth given, %s m, serves every value, though it changes with spacing and depth. Leave it out to have it computed for each.", short(t.Trench.Equivalent))
	}
	if first, last := found.Curve[0].PresentValue, found.Curve[len(found.Curve)-1].PresentValue; first != nil && *first == *last && *first != 0 {
		w := note("cost_not_sized")
		w.Option = found.Option
		ws.add(w, "The cost of the option is the same at every value, since no part of it goes with %s. Give it anew for the answer.", z.key)
	}
	safe := z.fromSafe(found.Curve)[0]
	switch {
	case found.Answer == nil || found.Answer.Meets != "not_shown":
	case found.Shown != nil:
		ws.add(at(warn("target_not_shown")), "Only the figure meets the target with the answer; the end of its range does not. Leave a margin, or take %s, which the range meets too.", found.Shown.Text)
	case safe.Figure == 0:
		ws.add(at(warn("target_not_shown")), "Only the figure meets the target, at every value: even without a single event in %s the range reaches beyond it. The record is too short to show that the target is met.", fault.Count(found.Record.YearsCounted, "year"))
	default:
		ws.add(at(warn("target_not_shown")), "Only the figure meets the target; at no value of the range does the end of its range meet it too. Leave a margin.")
	}
	var again []string
	for _, run := range meetsAgain(z.fromSafe(found.Curve)) {
		text := run[0].Text
		if len(run) > 1 {
			text += " to " + run[len(run)-1].Text
		}
		again = append(again, text)
	}
	if len(again) > 0 && found.Answer != nil {
		ws.add(at(warn("target_met_again")), "Beyond the first miss the target is met again: %s. More drainage can split one long event in two, so fewer events there are no less movement; do not choose these values.", firstOf(again, ", ", 8))
	}
}
