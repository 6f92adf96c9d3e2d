// How often a caller's arrays are copied on their way to the transport: at most twice.
#include <grpcpp/impl/codegen/proto_utils.h>
#include <gtest/gtest.h>

#include <cstdlib>
#include <map>
#include <new>
#include <string>

#include "kinegate/events.h"
#include "queue.h"
#include "sample.h"

namespace {
thread_local std::size_t allocated = 0;  // bytes, by this thread so far
}  // namespace

// Not inlined: the compiler takes a free of what it sees come from new for a mistake.
[[gnu::noinline]] void* operator new(std::size_t size) {
  allocated += size;
  if (void* memory = std::malloc(size)) return memory;
  throw std::bad_alloc();
}
[[gnu::noinline]] void operator delete(void* memory) noexcept {
  std::free(memory);
}
[[gnu::noinline]] void operator delete(void* memory, std::size_t /*size*/) noexcept {
  std::free(memory);
}

namespace kinegate {
namespace {

// Few is what may be allocated besides copies of columns.
constexpr std::size_t kFew = 10'000;

// ABlock is a block of a slice that does not start at the first row, with every column.
v1::EventBlock ABlock(std::size_t* bytes_allocated) {
  const testing::Full full(20'000);
  const EventArrays arrays = full.arrays();
  const std::size_t before = allocated;
  v1::EventBlock block = MakeBlock(arrays, 1'000, 18'000);
  *bytes_allocated = allocated - before;
  return block;
}

TEST(Copies, ABlockIsTheFirst) {
  std::size_t bytes = 0;
  const v1::EventBlock block = ABlock(&bytes);
  const std::size_t size = block.ByteSizeLong();
  EXPECT_GT(size, 100 * kFew);
  EXPECT_LT(bytes, size + kFew);
  EXPECT_GT(bytes, size - kFew) << "the columns themselves are counted";
}

// Places are where the columns of a block lie.
std::map<std::string, const char*> Places(const v1::EventBlock& block) {
  return {{"event_ids", block.event_ids().data()},
          {"theta_rad", block.momentum_angles().theta_rad().data()},
          {"covariance", block.covariance().elements().data()},
          {"beam", block.beam().energy_gev().data()}};
}

TEST(Copies, PushingIsNoneAndSerialisingTheSecond) {
  std::size_t bytes = 0;
  v1::EventBlock block = ABlock(&bytes);
  const auto places = Places(block);
  Queue queue(0, LatePolicy::kAccept);
  queue.SetLimit(1);
  std::size_t before = allocated;
  queue.Push({&block, nullptr, nullptr}, true);
  EXPECT_LT(allocated - before, kFew);

  const Queue::Turn turn = queue.Begin();
  v1::Credit credit;
  credit.set_block_count(1);
  queue.Grant(turn.number, credit);
  const auto frame = queue.WaitNext(turn.number, Clock::now()).frame;
  ASSERT_NE(frame, nullptr);
  EXPECT_EQ(Places(frame->block()), places);

  // What the transport does with a frame that is written: into its own slices, without a string between.
  grpc::ByteBuffer buffer;
  bool own = false;
  before = allocated;
  ASSERT_TRUE(grpc::SerializationTraits<v1::JudgeRequest>::Serialize(*frame, &buffer, &own).ok());
  EXPECT_LT(allocated - before, buffer.Length() + kFew);
  EXPECT_EQ(buffer.Length(), frame->ByteSizeLong());
}

}  // namespace
}  // namespace kinegate
