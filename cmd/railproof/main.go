// Command railproof checks the netlists of mains-fed DC power supplies against the ratings of their parts.
package main

import (
	"context"
	"os"
	"os/signal"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	code := run(ctx, os.Args[1:], standardStreams())
	stop()
	os.Exit(code)
}
