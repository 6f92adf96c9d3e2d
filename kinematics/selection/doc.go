// Package selection judges measured events: it tests each against reaction
// hypotheses, tries the assignments of objects to products, evaluates windows
// and takes the gate decision.
//
// A Selection is plain data. Compile checks it as a whole, reports every fault
// at once with the path of its field, and makes a Program, which is immutable
// and safe for concurrent use. A Worker judges with a Program; it owns the
// scratch memory, serves one goroutine at a time, and allocates nothing once its
// memory and that of the output have grown to the events.
//
//	program, err := selection.Compile(&sel, table) // err is a fault.List
//	worker := program.NewWorker(selection.AcceptedEntries)
//	var out event.VerdictBlock
//	worker.Reset(&out)                        // empties out, keeps its memory
//	worker.Judge(block, 0, block.Events(), &out) // appends the verdicts
//
// Judge takes a range of events and appends, so that a caller can stop between
// ranges and call Expire for the rest, or judge ranges on several workers, each
// into an output of its own, and Append those in order: every split gives the
// same bits.
//
//	worker.Judge(block, 0, 256, &out)
//	worker.Expire(block.Events()-256, &out)   // the latency budget is used up
//
//	parts[0].Judge(block, 0, half, &outs[0])  // on one goroutine
//	parts[1].Judge(block, half, n, &outs[1])  // on another
//	worker.Reset(&out)
//	worker.Append(&out, &outs[0])
//	worker.Append(&out, &outs[1])
//
// A single event may take as long as the work budget lasts. Worker.Stop, if it is set,
// is asked in between and ends the judging, for a cancelled call or a deadline:
//
//	worker.Stop = func() bool { return ctx.Err() != nil || late() }
//	if n := worker.Judge(block, from, to, &out); n < to-from {
//		worker.Expire(to-from-n, &out)
//	}
//
// The block must have passed event.Block.Validate. The caller sets the digest of
// the output.
//
// A block must have the columns that the fits of the selection need, which
// Program.Accepts tells. Explain lays the verdict on one event open.
//
// # What is judged
//
// An assignment gives each product that is seen an object of its own, of the class
// and species of the product and measured as far as the hypothesis asks. Two
// assignments that differ only by an exchange of identical products, decaying ones
// included, count once, unless the condition or the ranking of the hypothesis tells
// those products apart. Objects beyond the assigned ones must follow the rule on
// extra objects; an assignment that breaks it does not count as possible.
//
// A hypothesis accepts an event if an assignment passes its condition, with any of
// its beam candidates where it has tagged ones. Candidates in side bands accept
// too: their entries carry the weights with which a caller subtracts chance
// coincidences.
//
// An observable that cannot be computed for an event, such as the mass of a
// negative square, the vertex of an event without one or anything that is not a
// number, lies outside every window, also outside one without limits. So `not`
// holds for it: a condition "not in the window" is met by what cannot be computed.
//
// Assignments are tried in the order of their object indices, and windows are
// evaluated as soon as every product they need has its object, so that an
// assignment that fails early is never completed. The fit comes last. The work budget
// counts what was tried: complete assignments, once per beam candidate, and incomplete
// ones that a window ended. Vetoes are tested first, then the other hypotheses in their
// order; where the budget ends the gate opens for a hypothesis that was not finished as
// for one that accepts, so that nothing is lost, unless a veto accepts.
//
// A hypothesis with a fit accepts no assignment whose fit does not converge, and ranks
// by the probability of the fit unless it says otherwise.
package selection
