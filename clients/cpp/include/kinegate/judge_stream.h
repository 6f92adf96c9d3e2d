// A judge stream: blocks of events go in, verdicts come out in the same order.
#pragma once

#include <chrono>
#include <cstdint>
#include <functional>
#include <future>
#include <memory>
#include <string>

#include "kinegate/error.h"
#include "kinegate/gate.h"
#include "kinegate/v1/selection.pb.h"
#include "kinegate/verdicts.h"

namespace kinegate {

// LatePolicy says what the gate decides on events that the server answered EXPIRED, which is no
// judgement.
enum class LatePolicy {
  kAccept,  // late events pass, so that none is lost
  kReject,  // late events are dropped
};

// JudgeOptions say how a stream is kept up. The defaults are sound.
struct JudgeOptions {
  LatePolicy late = LatePolicy::kAccept;
  // Blocks that may be on their way at once, from Push until their handler returns; 0: twice the
  // server's credit.
  int queue_block_count = 0;
  // Time for the first opening, which waits for a server to be there.
  std::chrono::milliseconds opening{10'000};
  // Time without any frame after which a connection is dead. The server sends a heartbeat every
  // second.
  std::chrono::milliseconds silence{3'000};
  // Time without any verdict on blocks that the server has, after which it is stuck. It doubles
  // whenever it passes, in case blocks take longer.
  std::chrono::milliseconds stuck{3'000};
  // Time after a break in which the stream must be open again, else it ends.
  std::chrono::milliseconds give_up{60'000};
  // Called with the reason after each break, on a thread of the stream. May be empty. What it
  // throws ends the stream, as with a handler.
  std::function<void(const Error&)> on_break;
};

// Given is a selection sent along with the opening.
v1::SelectionSource Given(v1::Selection selection);
// Named is a selection that the server knows; an empty digest means the newest.
v1::SelectionSource Named(const std::string& name, const std::string& digest = "");

// JudgeStream is a judge stream that comes back when it breaks: it connects anew and goes on with
// the first block without a verdict and with the digest of the selection that it was opened with,
// so that the verdicts are those of a stream that never broke.
//
// It keeps the rules of the stream: credit, heartbeats, order, leaving a server that drains, and
// the policy for late events. The latency budget is that of the opening, latency_budget_s. Push,
// TryPush, Finish and Close may be called on any thread, but on none that runs a handler or
// on_break, and nor may the stream be destroyed there: it waits for the thread that it would run on.
// Handlers run one after the other on a thread of the stream, and hold up later verdicts alone.
//
// What a throwing handler does: the stream ends with that error, of which Push and Finish and the
// futures of blocks without a verdict then tell: an Error as it is, another exception in an Error
// with its text. Verdicts that had come by then still go to their handlers.
class JudgeStream {
 public:
  // Handler takes the verdicts on one block.
  using Handler = std::function<void(Verdicts)>;

  // Opens the stream. Throws Error where the server refuses, or is not there in time; that is
  // not tried again.
  JudgeStream(Gate gate, v1::JudgeOpen open, JudgeOptions options = {});
  // Ends the stream at once, see Close.
  ~JudgeStream();
  JudgeStream(const JudgeStream&) = delete;
  JudgeStream& operator=(const JudgeStream&) = delete;

  // opened is the server's answer to the first opening: selection, credit, limits. Where the opening
  // says follow, another selection may take over: each Verdicts has the outline of its own.
  const v1::JudgeOpened& opened() const;

  // Push queues a block, sets its sequence, and returns that. It waits while the queue is full.
  // After the end of the stream it throws Error with the reason. A handler whose block gets no
  // verdict is never called; Finish tells.
  std::int64_t Push(v1::EventBlock block, Handler handler);
  // Push as above, with the verdicts as a future, which holds an Error where the stream ends
  // without them.
  std::future<Verdicts> Push(v1::EventBlock block);
  // TryPush is Push that returns false at once where the queue is full, and leaves the block as it
  // is then.
  bool TryPush(v1::EventBlock& block, Handler handler);

  // Finish says that no more blocks will come, and returns when every handler has run and is gone.
  // Throws Error where the stream ended before.
  void Finish();
  // Close ends the stream at once: blocks without a verdict get none.
  void Close();

  // break_count is how often the stream broke so far.
  std::int64_t break_count() const;
  // late_count is how many events so far were late.
  std::int64_t late_count() const;

 private:
  class Runner;
  std::unique_ptr<Runner> runner_;
};

}  // namespace kinegate
