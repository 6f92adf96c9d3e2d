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
			measure: benchmarkMetric("./service/cmd/kinegate", "BenchmarkJudgeStream", "x-in-process"),
		},
		{
			name: "four-body phase space, events a second over numpy", limit: 3, aim: 5, atLeast: true,
			measure: timesFaster(
				benchmarkMetric("./kinematics/generation", "BenchmarkPhaseSpace/n=04", "ns/op"),
				numpy("phase_space.py"),
			),
		},
	}
}
