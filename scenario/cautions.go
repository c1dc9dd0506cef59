package scenario

// Version of the program, as results carry it.
const Version = "0.1.0"

// handCautions are those of a check by hand, which replays nothing.
var handCautions = []string{
	"These figures are of parallel drains in even ground over a level base. They are no stability analysis and no forecast of movement: nobody's safety may rest on them alone.",
	"What they do to the level that moves the slope, only a replay and then readings can show. Conductivity is seldom well known, and the rate goes with it: try a third of it, and three times as much.",
	Cautions[len(Cautions)-1],
}

// Cautions are the short form of SAFETY.md. They stand in every result of a replay.
var Cautions = []string{
	"These figures compare options on one record. They are no stability analysis, no forecast of movement and no warning system: nobody's safety may rest on them alone.",
	"Each layer has a single level. Left out: flow along and across the slope, pressure in the clay that lags its fissures, water held up above the table, artesian water, frost, snow (it counts as rain on the day it falls), earthquake, loading, cutting and erosion of the toe.",
	"Level and movement do not go one to one: movement may start, go on or stop at other levels than the bands, and it changes the ground and its fissures.",
	"Works act in full from the first day to the last, as built or as a condition says. Drains age only where a decline is given, and then every year counts as the mean over their ages; none shears or is repaired on the way. Look at the figures with drains stopped too. Digging and boring load, vibrate and open the slope while the works are built.",
	"A target that is met on one record is not safety. Costs and losses are those that the study gives; what it leaves out is not counted.",
	"A record that is replayed says nothing of rarer winters or of a climate that changes.",
	"After the works go on measuring deep and shallow levels, drain flow, movement and rain, and inspect the outlets; act when they leave what was expected.",
	"Design, acceptance of risk and public safety rest with licensed engineers and the owner under the codes that apply locally, which may require drains to be considered failed.",
}
