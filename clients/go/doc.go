// Package kinegate is the Go client of a kinegate server. README.md beside it says how to
// import it, which go get cannot.
//
// Dial connects over TCP, TLS or a unix socket. The fields of a Client are the plain
// generated clients, one a service: every unary call has a deadline, waits for a server to
// be ready, and is tried again where the server says that another try may help, as
// ServiceConfig says. Reach is for people, who rather learn at once that nobody listens.
//
// # Judging
//
// A server has two listeners: one for questions and bulk work, and the gate, whose streams
// nothing else delays. Judge opens a stream there and keeps the rules of the protocol:
//
//   - The opening waits for a server to be there, for JudgeOptions.Opening.
//   - The queue between Send and Recv is bounded: Send waits while JudgeOptions.Queue blocks
//     are on their way, so that Recv must go on beside it. On the line are never more blocks
//     and bytes than the server's credit allows.
//   - Verdicts come in the order of the blocks, each exactly once.
//   - A heartbeat goes out after a second of silence. A server that is silent for
//     JudgeOptions.Silence, or that has blocks and answers none for JudgeOptions.Stuck, is
//     left for a new connection.
//   - A stream that breaks comes back by itself: it opens anew with the digest that it began
//     with and sends again what had no verdict. The verdicts are those of a stream that
//     never broke. JudgeOptions.GiveUp bounds the attempts, JudgeOptions.Broken hears of them.
//   - Events that the server could not judge within the latency budget of the opening are
//     EXPIRED. JudgeOptions.Late decides on them: AcceptLate, the default, loses none.
//     JudgeStream.LateCount counts them.
//
// A Builder makes blocks of events and ReadVerdicts reads the columns of the answers;
// ReadEvents takes simulated blocks apart.
package kinegate
