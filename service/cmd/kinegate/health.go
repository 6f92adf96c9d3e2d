package main

import (
	"context"
	"fmt"
	"time"

	"github.com/spf13/cobra"
	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"

	"example.org/kinegate/service/server"
)

// healthPatience is how long the answer may take.
const healthPatience = 2 * time.Second

// healthCommand asks a server's health listener: the probe of places that have no other,
// such as the image, which holds this program alone.
func healthCommand(p program) *cobra.Command {
	address, name := server.Defaults().HealthAddress, server.Readiness
	command := &cobra.Command{
		Use:   "health",
		Short: "Ask a server whether it serves: the probe of an image without other programs",
		Long: "health asks the plaintext health listener of a server and prints the state. It ends with 0\n" +
			"if that is SERVING, and with 1 if it is not or nobody answers within 2 s.",
		Args: usage(cobra.NoArgs),
		RunE: func(command *cobra.Command, _ []string) error {
			state, err := askHealth(command.Context(), address, name)
			if err != nil {
				return err
			}
			if _, err := fmt.Fprintln(p.out, state); err != nil {
				return fmt.Errorf("printing the state: %w", err)
			}
			if state != healthpb.HealthCheckResponse_SERVING {
				return fmt.Errorf("%s at %s is %s", name, address, state)
			}
			return nil
		},
	}
	command.Flags().StringVar(&address, "address", address, "Address of the health listener: host:port, or unix:path.")
	command.Flags().StringVar(&name, "name", name, "What is asked for: readiness, liveness or the name of a service.")
	return command
}

// askHealth asks for the state of a name.
func askHealth(ctx context.Context, address, name string) (healthpb.HealthCheckResponse_ServingStatus, error) {
	conn, err := grpc.NewClient(address, grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		return 0, usageError{fmt.Errorf("address %q: %w", address, err)}
	}
	defer func() { _ = conn.Close() }()
	ctx, cancel := context.WithTimeout(ctx, healthPatience)
	defer cancel()
	reply, err := healthpb.NewHealthClient(conn).Check(ctx, &healthpb.HealthCheckRequest{Service: name})
	if err != nil {
		return 0, fmt.Errorf("no state of %s from %s: %w", name, address, err)
	}
	return reply.GetStatus(), nil
}
