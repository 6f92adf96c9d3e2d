package main

// rows lists the promises in the order in which they are printed. A new one needs a name,
// its limit and aim, and a function that measures it.
func rows() []row {
	d := &describing{}
	return []row{
		{
			name: "DescribeReaction, median latency over a bare echo", limit: 1.3, aim: 1.1,
			measure: d.ratio("gamma p -> K+ Lambda, Lambda -> p pi-"),
		},
		{
			name:    "  the same with a text that the server has not read yet",
			measure: d.ratio(""),
		},
		{
			name: "judge stream, server time over judging in process", limit: 1.5, aim: 1.3,
			measure: benchmarkMetric("BenchmarkJudgeStream", "x-in-process"),
		},
		{name: "judging in process over a plain C++ loop (-O2), one core", measure: judgingAgainst("loop")},
		{name: "  the same over numpy", measure: judgingAgainst("numpy")},
		{
			name: "p99 of verdicts beside bulk work over alone", limit: 3, aim: 1,
			measure: benchmarkMetric("BenchmarkGateBesideBulk", "x-p99"),
		},
		{name: "  verdict on 100 events at 20 % load, median in us", measure: latency("load=20", "us-p50")},
		{name: "  verdict on 100 events at 20 % load, p99 in us", measure: latency("load=20", "us-p99")},
		{name: "  verdict on 100 events at 50 % load, median in us", measure: latency("load=50", "us-p50")},
		{name: "  verdict on 100 events at 50 % load, p99 in us", measure: latency("load=50", "us-p99")},
		{name: "  verdict on 100 events at 80 % load, median in us", measure: latency("load=80", "us-p50")},
		{name: "  verdict on 100 events at 80 % load, p99 in us", measure: latency("load=80", "us-p99")},
		{
			name: "six-photon pair masses over plain numpy", limit: 2, aim: 4, atLeast: true,
			measure: pairMasses("plain"),
		},
		{name: "  the same over numpy in place", measure: pairMasses("in-place")},
		{name: "  the same over a plain C++ loop (-O2)", measure: pairMasses("loop")},
		{
			name: "simulated events to a client, rate over in process", limit: 0.6, aim: 0.8, atLeast: true,
			measure: benchmarkMetric("BenchmarkGenerateEvents", "of-in-process-rate"),
		},
		{
			name: "four-body phase space, events a second over numpy", limit: 3, aim: 5, atLeast: true,
			measure: timesFaster(
				processorTime("./kinematics/generation", "BenchmarkPhaseSpace/n=04", 500_000),
				numpy("phase_space.py"),
			),
		},
		{
			name: "fit of four photons, proton missing, over scipy", limit: 300, aim: 500, atLeast: true,
			measure: fits("missing"),
		},
		{
			name: "fit of four photons and a proton, over scipy", limit: 300, aim: 500, atLeast: true,
			measure: fits("measured"),
		},
	}
}

// fits compares constrained fits of the same events; proton says what is known of it.
func fits(proton string) measure {
	return timesFaster(
		processorTime("./kinematics/constraint", "BenchmarkFourPhotons/"+proton, 50_000),
		numpy("constrained_fit.py", proton),
	)
}

// latency reads one figure of the open-loop generator.
func latency(load, figure string) measure {
	return benchmarkMetric("BenchmarkJudgeLatency/"+load, figure)
}
