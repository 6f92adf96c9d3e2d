#include "link.h"

#include <string>
#include <utility>

namespace kinegate {
namespace {

constexpr std::chrono::milliseconds kHeartbeat{1'000};
// How often the times of a link are looked at.
constexpr std::chrono::milliseconds kLook{50};
// How long the threads of a link that was cut are waited for.
constexpr std::chrono::milliseconds kLeave{100};

// Passing says whether another attempt may go better after a status. INTERNAL, UNKNOWN and
// CANCELLED without a word from a server come from the transport.
bool Passing(const Error& error) {
  if (!error.reason().empty()) {
    // The server ends a stream after a minute of silence; ours was cut off.
    return error.code() == grpc::StatusCode::UNAVAILABLE || error.reason() == "STREAM_IDLE";
  }
  switch (error.code()) {
    case grpc::StatusCode::UNAVAILABLE:
    case grpc::StatusCode::INTERNAL:
    case grpc::StatusCode::UNKNOWN:
    case grpc::StatusCode::CANCELLED:
      return true;
    default:
      return false;
  }
}

Error Broken(const std::string& how) {
  return Error("the server broke the protocol of the stream: " + how);
}

}  // namespace

Link::Link(const Gate& gate, std::shared_ptr<Queue> queue)
    : queue_(std::move(queue)), channel_(gate.Connect()), stub_(v1::SelectionService::NewStub(channel_)) {}

std::optional<Break> Link::Open(v1::JudgeOpen open, std::chrono::milliseconds within, bool first) {
  const Queue::Turn turn = queue_->Begin();
  turn_ = turn.number;
  open.set_first_sequence(turn.first_sequence);
  last_seen_ = Clock::now();
  context_.set_wait_for_ready(first);
  running_ = 1;
  receiver_ = std::thread([self = shared_from_this(), open = std::move(open)] { self->Receive(open); });
  if (Watch(within, nullptr, [this] { return open_; })) return std::nullopt;
  Leave();
  return *over_;
}

Break Link::Serve(std::chrono::milliseconds silence, const Stuck& stuck) {
  {
    const std::lock_guard lock(mutex_);
    ++running_;
  }
  queue_->Grant(turn_, opened_.credit());
  sender_ = std::thread([self = shared_from_this()] { self->Send(); });
  Watch(silence, stuck, [] { return false; });
  Leave();
  return *over_;
}

// Watch waits until something holds, and cuts a link that is silent or stuck before; false when the
// link is over. It never sends, which could block.
bool Link::Watch(std::chrono::milliseconds silence, const Stuck& stuck, const std::function<bool()>& until) {
  std::unique_lock lock(mutex_);
  while (!changed_.wait_for(lock, kLook, [&] { return over_ || until(); })) {
    lock.unlock();
    const auto now = Clock::now();
    if (now - last_seen_.load() > silence) {
      Cut(Error("the server was silent for " + std::to_string(silence.count()) + " ms",
                grpc::StatusCode::UNAVAILABLE),
          true);
    } else if (stuck) {
      if (auto error = stuck(now)) Cut(*std::move(error), true);
    }
    lock.lock();
  }
  return !over_;
}

void Link::Leave() {
  Cut(Error("the link was left", grpc::StatusCode::CANCELLED), false);
  std::unique_lock lock(mutex_);
  const bool ended = changed_.wait_for(lock, kLeave, [this] { return running_ == 0; });
  lock.unlock();
  for (std::thread* thread : {&receiver_, &sender_}) {
    if (!thread->joinable()) continue;
    if (ended) {
      thread->join();
    } else {
      thread->detach();
    }
  }
}

void Link::Cut(Error why, bool passing) {
  Over(Break{std::move(why), passing});
  context_.TryCancel();
}

void Link::Over(Break why) {
  {
    const std::lock_guard lock(mutex_);
    if (!over_) over_ = std::move(why);
    changed_.notify_all();
  }
  queue_->Interrupt(turn_);
}

// Receive opens the rpc and takes frames until it ends.
void Link::Receive(const v1::JudgeOpen& open) {
  stream_ = stub_->Judge(&context_);
  v1::JudgeRequest request;
  *request.mutable_open() = open;
  // A failed write shows at the read.
  stream_->Write(request);
  if (auto broken = TakeFrames(open.follow())) Cut(std::move(broken->error), broken->passing);
  // The sender must be gone before the status can be taken.
  queue_->Interrupt(turn_);
  {
    std::unique_lock lock(mutex_);
    changed_.wait(lock, [this] { return running_ == 1; });
  }
  v1::JudgeResponse rest;
  while (stream_->Read(&rest)) {
  }
  const grpc::Status status = stream_->Finish();
  if (status.ok()) {
    Over({Error("the server has left", grpc::StatusCode::UNAVAILABLE), true});
  } else {
    Error error = Error::FromStatus(status);
    const bool passing = Passing(error);
    Over({std::move(error), passing});
  }
  const std::lock_guard lock(mutex_);
  --running_;
  changed_.notify_all();
}

// TakeFrames takes the opening and then what comes, and returns how the server broke the protocol.
std::optional<Break> Link::TakeFrames(bool follow) {
  v1::JudgeResponse response;
  if (!stream_->Read(&response)) return std::nullopt;
  if (!response.has_opened()) return Break{Broken("its first frame is no opening"), false};
  last_seen_ = Clock::now();
  queue_->Announce(turn_, response.opened().selection());
  {
    const std::lock_guard lock(mutex_);
    opened_ = std::move(*response.mutable_opened());
    open_ = true;
    changed_.notify_all();
  }
  while (stream_->Read(&response)) {
    last_seen_ = Clock::now();
    if (response.has_verdict()) {
      try {
        queue_->Settle(turn_, std::move(*response.mutable_verdict()));
      } catch (const Error& error) {
        return Break{Broken(error.what()), false};
      }
    } else if (response.has_taken()) {
      if (!follow) return Break{Broken("another selection took over"), false};
      queue_->Announce(turn_, std::move(*response.mutable_taken()));
    } else if (response.has_draining()) {
      queue_->Drain(turn_);
    }
  }
  return std::nullopt;
}

// Send sends blocks as the credit allows, a heartbeat after a second without a frame, and the end.
// A failure shows at the receiver.
void Link::Send() {
  auto last_sent = Clock::now();
  for (bool more = true; more;) {
    const Queue::Next next = queue_->WaitNext(turn_, last_sent + kHeartbeat);
    last_sent = Clock::now();
    switch (next.step) {
      case Queue::Step::kBlock:
        stream_->Write(*next.frame);
        break;
      case Queue::Step::kWait: {
        v1::JudgeRequest beat;
        beat.mutable_heartbeat()->set_received_sequence(next.last_answered);
        beat.mutable_heartbeat()->set_answered_sequence(next.last_answered);
        stream_->Write(beat);
        break;
      }
      case Queue::Step::kFinish:
        stream_->WritesDone();
        more = false;
        break;
      case Queue::Step::kOver:
        more = false;
        break;
    }
  }
  const std::lock_guard lock(mutex_);
  --running_;
  changed_.notify_all();
}

}  // namespace kinegate
