package main

import (
	"context"
	"fmt"
	"io"
	"net"

	"google.golang.org/grpc"
	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// echoCommand makes this program the echo.
const echoCommand = "echo"

// echoService answers DescribeReaction with the same reply always.
type echoService struct {
	kinegatev1.UnimplementedReactionServiceServer

	reply *kinegatev1.DescribeReactionResponse
}

// DescribeReaction returns the reply.
func (e *echoService) DescribeReaction(
	context.Context, *kinegatev1.DescribeReactionRequest,
) (*kinegatev1.DescribeReactionResponse, error) {
	return e.reply, nil
}

// echo reads the reply from in, serves it on a loopback port with a bare gRPC server, and
// prints the address. It ends when it is killed.
func echo(in io.Reader, out io.Writer) error {
	wire, err := io.ReadAll(in)
	if err != nil {
		return err
	}
	service := &echoService{reply: &kinegatev1.DescribeReactionResponse{}}
	if err := proto.Unmarshal(wire, service.reply); err != nil {
		return err
	}
	var config net.ListenConfig
	l, err := config.Listen(context.Background(), "tcp", "127.0.0.1:0")
	if err != nil {
		return err
	}
	if _, err := fmt.Fprintln(out, l.Addr()); err != nil {
		return err
	}
	server := grpc.NewServer()
	kinegatev1.RegisterReactionServiceServer(server, service)
	return server.Serve(l)
}
