// Package kinegate is the Go client of a kinegate server.
//
// Dial connects with sane defaults: every call has a deadline, waits for the
// server to be ready, and is tried again where the server says that another try
// may help. The fields of a Client are the plain generated clients, one a service.
//
//	client, err := kinegate.Dial("unix:/run/kinegate/general.sock", kinegate.Options{})
//	if err != nil {
//		return err
//	}
//	defer client.Close()
//	answer, err := client.Reactions.DescribeReaction(ctx, &kinegatev1.DescribeReactionRequest{
//		Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: "gamma p -> K+ Lambda"},
//	})
//
// Judge opens a judge stream and keeps its rules: credit, heartbeats and order. A stream
// that breaks comes back by itself and loses nothing.
package kinegate
