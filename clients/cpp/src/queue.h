// The blocks of a stream that have no verdict yet, over all its connections, and the rules of
// order and credit.
#pragma once

#include <chrono>
#include <condition_variable>
#include <cstdint>
#include <deque>
#include <functional>
#include <map>
#include <memory>
#include <mutex>
#include <optional>
#include <string>

#include "kinegate/error.h"
#include "kinegate/judge_stream.h"
#include "kinegate/v1/selection.pb.h"
#include "kinegate/verdicts.h"

namespace kinegate {

using Clock = std::chrono::steady_clock;

// Answer is a verdict that its handler has not seen yet.
struct Answer {
  Verdicts verdicts;
  JudgeStream::Handler handler;
};

// Ask is a block with what to do about its verdict. Exactly one of the two is called, failed only
// where the caller cares.
struct Ask {
  v1::EventBlock* block;
  JudgeStream::Handler handler;
  std::function<void(const Error&)> failed;
};

// Queue is safe for use by all threads of a stream: the caller pushes, one thread sends what Next
// says, one settles verdicts, one takes them to their handlers.
class Queue {
 public:
  Queue(std::int64_t first_sequence, LatePolicy late);
  // SetLimit says how many blocks may be in here, from Push until Taken; none before.
  void SetLimit(std::size_t limit);

  // Push takes a block and returns its sequence; nothing where the queue is full and must not be
  // waited for. Throws after the end.
  std::optional<std::int64_t> Push(Ask ask, bool wait);
  // Finish says that no more blocks will come.
  void Finish();
  // WaitUntilDone returns when every handler has run, and throws where the stream ended before.
  void WaitUntilDone();

  // Turn is the use of the queue by one connection. What an older one still says is passed over.
  struct Turn {
    std::int64_t number;
    std::int64_t first_sequence;  // of the first block without a verdict
  };
  // Begin begins the turn of a new connection: nothing was sent on it.
  Turn Begin();
  // Grant says what the server of that connection lets it have unanswered.
  void Grant(std::int64_t turn, const v1::Credit& credit);
  // Drain says that nothing more may be sent on it.
  void Drain(std::int64_t turn);
  // Interrupt says that it is over.
  void Interrupt(std::int64_t turn);

  // What a connection is to do next. A frame stays valid after its verdict and the queue's end: one
  // that is being sent may outlive both.
  enum class Step { kBlock, kWait, kFinish, kOver };
  struct Next {
    Step step;
    std::shared_ptr<const v1::JudgeRequest> frame;
    std::int64_t last_answered = 0;  // sequence of the last verdict
  };
  // WaitNext returns the next step: kWait where there is none until a time, kFinish once after the
  // last block, kOver after the turn.
  Next WaitNext(std::int64_t turn, Clock::time_point until);

  // Announce takes the outline of a selection that is going to judge.
  void Announce(std::int64_t turn, v1::SelectionOutline outline);
  // Settle takes a verdict. It throws where that is unsound, not on the oldest block or on another
  // number of events, of a selection that was not announced, or where that block was not sent.
  void Settle(std::int64_t turn, v1::VerdictBlock block);
  // last_answered is the sequence of the last verdict.
  std::int64_t last_answered() const;
  // Stuck says for how long the server has had blocks without answering any; 0 where it has none.
  Clock::duration Stuck(Clock::time_point now) const;
  // done says that every block has its verdict and no more will come.
  bool done() const;
  std::int64_t late_count() const;

  // Take waits for the next answer; nothing at the end of the stream. Taken follows when its
  // handler has run.
  std::optional<Answer> Take();
  void Taken();
  // End ends the stream, with the reason where it did not end well. The first reason counts, also
  // after a good end: the last handler may fail when every verdict is there.
  void End(std::optional<Error> why);

 private:
  // Pending is a block without a verdict. A sender shares its frame alone: what the caller gave
  // goes with the queue.
  struct Pending {
    std::shared_ptr<const v1::JudgeRequest> frame;
    std::int64_t byte_count;
    JudgeStream::Handler handler;
    std::function<void(const Error&)> failed;
  };

  bool Affords(const Pending& next) const;
  std::int64_t LastAnswered() const;

  const LatePolicy late_;

  mutable std::mutex mutex_;
  std::condition_variable room_, work_, answers_, over_;
  std::deque<Pending> waiting_;  // oldest first
  std::deque<Answer> answered_;
  std::size_t handling_ = 0;  // answers not Taken, those in answered_ included
  std::size_t limit_ = 0;
  std::int64_t next_;  // sequence of the next block
  std::int64_t late_count_ = 0;
  // By digest: as many as versions of the selection were reloaded.
  std::map<std::string, std::shared_ptr<const v1::SelectionOutline>> outlines_;
  bool finished_ = false;
  bool ended_ = false;
  std::optional<Error> why_;

  // Of the connection at hand: the first sent_ of waiting_ are at the server.
  std::size_t sent_ = 0;
  std::int64_t sent_bytes_ = 0;
  v1::Credit credit_;
  bool draining_ = false;
  bool interrupted_ = true;
  std::int64_t turn_ = 0;
  Clock::time_point progress_{};  // last verdict, or the first block after a time without any
};

}  // namespace kinegate
