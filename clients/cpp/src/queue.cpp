#include "queue.h"

#include <algorithm>
#include <string>
#include <utility>

namespace kinegate {
namespace {

constexpr unsigned kBitsPerByte = 8;

// AcceptLate sets the gate bit of every late event, and counts them.
std::int64_t ReadLate(LatePolicy policy, v1::VerdictBlock* block) {
  std::int64_t count = 0;
  const std::string& statuses = block->statuses();
  for (std::size_t i = 0; i < statuses.size(); ++i) {
    if (static_cast<unsigned char>(statuses[i]) != v1::EVENT_STATUS_EXPIRED) continue;
    ++count;
    if (policy == LatePolicy::kAccept && i / kBitsPerByte < block->gate().size()) {
      char& byte = (*block->mutable_gate())[i / kBitsPerByte];
      byte = static_cast<char>(static_cast<unsigned char>(byte) | 1U << (i % kBitsPerByte));
    }
  }
  return count;
}

}  // namespace

Queue::Queue(std::int64_t first_sequence, LatePolicy late) : late_(late), next_(first_sequence) {}

void Queue::SetLimit(std::size_t limit) {
  const std::lock_guard lock(mutex_);
  limit_ = limit;
  room_.notify_all();
}

std::optional<std::int64_t> Queue::Push(Ask ask, bool wait) {
  std::unique_lock lock(mutex_);
  const auto open = [this] { return ended_ || finished_ || waiting_.size() + handling_ < limit_; };
  if (wait) room_.wait(lock, open);
  if (ended_) throw why_ ? *why_ : Error("the stream was closed", grpc::StatusCode::CANCELLED);
  if (finished_) throw Error("a block after Finish", grpc::StatusCode::FAILED_PRECONDITION);
  if (!open()) return std::nullopt;
  auto frame = std::make_shared<v1::JudgeRequest>();
  ask.block->set_sequence(next_);
  *frame->mutable_block() = std::move(*ask.block);
  const auto byte_count = static_cast<std::int64_t>(frame->block().ByteSizeLong());
  waiting_.push_back({std::move(frame), byte_count, std::move(ask.handler), std::move(ask.failed)});
  work_.notify_all();
  return next_++;
}

void Queue::Finish() {
  const std::lock_guard lock(mutex_);
  finished_ = true;
  work_.notify_all();
  room_.notify_all();
}

void Queue::WaitUntilDone() {
  std::unique_lock lock(mutex_);
  over_.wait(lock, [this] { return ended_ && handling_ == 0; });
  if (why_) throw Error(*why_);
}

Queue::Turn Queue::Begin() {
  const std::lock_guard lock(mutex_);
  sent_ = 0;
  sent_bytes_ = 0;
  credit_.Clear();
  draining_ = false;
  interrupted_ = ended_;
  work_.notify_all();
  return {++turn_, LastAnswered() + 1};
}

void Queue::Grant(std::int64_t turn, const v1::Credit& credit) {
  const std::lock_guard lock(mutex_);
  if (turn == turn_) credit_ = credit;
}

void Queue::Drain(std::int64_t turn) {
  const std::lock_guard lock(mutex_);
  if (turn == turn_) draining_ = true;
}

void Queue::Interrupt(std::int64_t turn) {
  const std::lock_guard lock(mutex_);
  if (turn == turn_) interrupted_ = true;
  work_.notify_all();
}

bool Queue::Affords(const Pending& next) const {
  // A single block beyond the credit of bytes is the server's to refuse.
  return sent_ == 0 || (static_cast<std::int64_t>(sent_) < credit_.block_count() &&
                        sent_bytes_ + next.byte_count <= credit_.byte_count());
}

Queue::Next Queue::WaitNext(std::int64_t turn, Clock::time_point until) {
  std::unique_lock lock(mutex_);
  while (true) {
    if (turn != turn_ || interrupted_) return {Step::kOver, nullptr, LastAnswered()};
    if (finished_ && sent_ == waiting_.size()) return {Step::kFinish, nullptr, LastAnswered()};
    if (sent_ < waiting_.size() && !draining_ && Affords(waiting_[sent_])) {
      const Pending& next = waiting_[sent_];
      if (sent_ == 0) progress_ = Clock::now();
      ++sent_;
      sent_bytes_ += next.byte_count;
      return {Step::kBlock, next.frame, LastAnswered()};
    }
    if (work_.wait_until(lock, until) == std::cv_status::timeout) {
      return {Step::kWait, nullptr, LastAnswered()};
    }
  }
}

void Queue::Announce(std::int64_t turn, v1::SelectionOutline outline) {
  const std::lock_guard lock(mutex_);
  if (turn != turn_) return;
  std::string digest = outline.selection_digest();
  outlines_[std::move(digest)] = std::make_shared<const v1::SelectionOutline>(std::move(outline));
}

void Queue::Settle(std::int64_t turn, v1::VerdictBlock block) {
  const std::int64_t late = ReadLate(late_, &block);
  std::shared_ptr<const v1::SelectionOutline> outline;
  {
    const std::lock_guard lock(mutex_);
    if (turn != turn_) return;
    const auto announced = outlines_.find(block.selection_digest());
    if (announced == outlines_.end()) {
      throw Error("verdict " + std::to_string(block.sequence()) +
                  " is of a selection that was not announced");
    }
    outline = announced->second;
  }
  Verdicts verdicts(std::move(block), std::move(outline));
  const std::lock_guard lock(mutex_);
  if (turn != turn_) return;
  if (sent_ == 0 || verdicts.sequence() != waiting_.front().frame->block().sequence()) {
    throw Error("verdict " + std::to_string(verdicts.sequence()) + " was not due");
  }
  const std::size_t events = waiting_.front().frame->block().event_ids().size() / sizeof(std::int64_t);
  if (!verdicts.rejected() && verdicts.event_count() != events) {
    throw Error("verdict " + std::to_string(verdicts.sequence()) + " answers " +
                std::to_string(verdicts.event_count()) + " events where " + std::to_string(events) +
                " are due");
  }
  Pending oldest = std::move(waiting_.front());
  waiting_.pop_front();
  --sent_;
  sent_bytes_ -= oldest.byte_count;
  late_count_ += late;
  progress_ = Clock::now();
  ++handling_;
  answered_.push_back({std::move(verdicts), std::move(oldest.handler)});
  answers_.notify_one();
  work_.notify_all();
}

std::int64_t Queue::LastAnswered() const {
  return next_ - static_cast<std::int64_t>(waiting_.size()) - 1;
}

std::int64_t Queue::last_answered() const {
  const std::lock_guard lock(mutex_);
  return LastAnswered();
}

Clock::duration Queue::Stuck(Clock::time_point now) const {
  const std::lock_guard lock(mutex_);
  return sent_ == 0 ? Clock::duration::zero() : std::max(now - progress_, Clock::duration::zero());
}

bool Queue::done() const {
  const std::lock_guard lock(mutex_);
  return finished_ && waiting_.empty();
}

std::int64_t Queue::late_count() const {
  const std::lock_guard lock(mutex_);
  return late_count_;
}

std::optional<Answer> Queue::Take() {
  std::unique_lock lock(mutex_);
  answers_.wait(lock, [this] { return ended_ || !answered_.empty(); });
  if (answered_.empty()) return std::nullopt;
  std::optional<Answer> answer(std::move(answered_.front()));
  answered_.pop_front();
  return answer;
}

void Queue::Taken() {
  const std::lock_guard lock(mutex_);
  --handling_;
  room_.notify_all();
  over_.notify_all();
}

void Queue::End(std::optional<Error> why) {
  std::deque<Pending> unanswered;
  {
    const std::lock_guard lock(mutex_);
    if (!why_) why_ = why;
    if (ended_) return;
    ended_ = interrupted_ = true;
    unanswered.swap(waiting_);
    sent_ = 0;
    room_.notify_all();
    work_.notify_all();
    answers_.notify_all();
    over_.notify_all();
  }
  const Error error = why ? *why : Error("the stream was closed", grpc::StatusCode::CANCELLED);
  for (const Pending& pending : unanswered) {
    if (pending.failed) pending.failed(error);
  }
}

}  // namespace kinegate
