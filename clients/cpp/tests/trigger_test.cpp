// The parts of the example trigger node, and the node itself over a server.
#include <gtest/gtest.h>
#include <unistd.h>

#include <fstream>
#include <memory>
#include <sstream>
#include <thread>

#include "blockfile.h"
#include "kinegate/error.h"
#include "process.h"
#include "ring.h"
#include "sample.h"
#include "source.h"

namespace kinegate::trigger {
namespace {

using testing::Folder;
using testing::Sample;

// WriteBlocks writes a sample as a file of blocks of 30 events.
void WriteBlocks(const std::string& name, const Sample& sample) {
  std::ofstream file(name, std::ios::binary);
  for (std::size_t first = 0; first < sample.ids.size(); first += 30) {
    const std::string bytes = MakeBlock(sample.arrays(), first, 30).SerializeAsString();
    for (std::size_t length = bytes.size(); true; length >>= 7) {
      file.put(static_cast<char>(length < 128 ? length : (length & 127) | 128));
      if (length < 128) break;
    }
    file << bytes;
  }
}

TEST(BlockFile, ReadsBackWhatWasWritten) {
  const Folder folder;
  const Sample sample(90);
  WriteBlocks(folder / "e.kgb", sample);
  const Events events = ReadBlockFile(folder / "e.kgb");
  EXPECT_EQ(events.ids, sample.ids);
  EXPECT_EQ(events.offsets, sample.offsets);
  EXPECT_EQ(events.values[1], sample.theta);
  EXPECT_EQ(MakeBlock(events.arrays(), 40, 10).momentum_angles().phi_rad(),
            MakeBlock(sample.arrays(), 40, 10).momentum_angles().phi_rad());
}

TEST(BlockFile, BadFilesAreTold) {
  const Folder folder;
  EXPECT_THROW(ReadBlockFile(folder / "none"), Error);
  std::ofstream(folder / "empty").close();
  EXPECT_THROW(ReadBlockFile(folder / "empty"), Error);
  std::ofstream(folder / "text") << "no blocks";
  EXPECT_THROW(ReadBlockFile(folder / "text"), Error);
}

TEST(Ring, KeepsOrderAndCountsWhatItLoses) {
  const Folder folder;
  const Sample sample(90);
  WriteBlocks(folder / "e.kgb", sample);
  const Events events = ReadBlockFile(folder / "e.kgb");
  const std::string name = "/kinegate-test-" + std::to_string(::getpid());
  EXPECT_THROW(Ring::Join(name), Error);
  EXPECT_THROW(Ring::Create(name, 3), Error);
  Ring writer = Ring::Create(name, 4);
  Ring reader = Ring::Join(name);
  for (std::size_t i = 0; i < 6; ++i) EXPECT_EQ(writer.Write(MakeSlot(events, i)), i < 4);
  EXPECT_EQ(reader.lost_count(), 2);
  Events read;
  for (std::size_t i = 0; i < 4; ++i) {
    AppendSlot(*reader.Read(), &read);
    reader.Free();
  }
  EXPECT_EQ(reader.Read(), nullptr);
  EXPECT_EQ(read.ids, (std::vector<std::int64_t>{0, 1, 2, 3}));
  EXPECT_EQ(MakeBlock(read.arrays()).momentum_angles().theta_rad(),
            MakeBlock(sample.arrays(), 0, 4).momentum_angles().theta_rad());
  EXPECT_FALSE(reader.finished());
  writer.Finish();
  EXPECT_TRUE(reader.finished());
}

TEST(Ring, CarriesEventsBetweenThreads) {
  const Folder folder;
  const Sample sample(90);
  WriteBlocks(folder / "e.kgb", sample);
  const Events events = ReadBlockFile(folder / "e.kgb");
  const std::string name = "/kinegate-test2-" + std::to_string(::getpid());
  Ring writer = Ring::Create(name, 64);
  const auto source = FromRing(name);
  std::thread thread([&] {
    for (std::size_t i = 0; i < 9000; ++i) {
      Slot slot = MakeSlot(events, i % 90);
      slot.id = static_cast<std::int64_t>(i);
      while (!writer.Write(slot)) std::this_thread::yield();
    }
    writer.Finish();
  });
  Batch batch;
  std::int64_t due = 0;
  while (source->Take(100, std::chrono::microseconds(200), &batch)) {
    for (std::size_t i = 0; i < batch.count; ++i) ASSERT_EQ(batch.arrays.event_ids[i], due++);
  }
  thread.join();
  EXPECT_EQ(due, 9000);
}

// Node runs the trigger node and returns what it prints.
std::string Node(const std::vector<std::string>& flags, const Folder& folder) {
  std::vector<std::string> command{testing::Program("TRIGGER_PROGRAM")};
  command.insert(command.end(), flags.begin(), flags.end());
  testing::Process process;
  process.Start(command, folder / "out");
  EXPECT_EQ(process.Wait(), 0);
  std::ifstream file(folder / "out");
  std::ostringstream text;
  text << file.rdbuf();
  return text.str();
}

class TriggerNode : public ::testing::Test {
 protected:
  TriggerNode() {
    std::ofstream(folder_ / "pairs.yaml")
        << "name: pairs\nhypotheses:\n  - name: pair\n    reaction: \"pi0 -> gamma "
           "gamma\"\n    extra_objects: {any: {}}\n";
    server_ = std::make_unique<testing::Server>(
        "", std::vector<std::string>{"--selection-files", folder_ / "pairs.yaml"});
    WriteBlocks(folder_ / "e.kgb", Sample(3000));
  }

  const Folder folder_;
  std::unique_ptr<testing::Server> server_;
};

TEST_F(TriggerNode, FromAFileAtARate) {
  const std::string said = Node({"--gate", server_->address(), "--selection", "pairs", "--events",
                                 folder_ / "e.kgb", "--rate", "3000", "--seconds", "1"},
                                folder_);
  EXPECT_NE(said.find("events 3000 "), std::string::npos) << said;
  EXPECT_NE(said.find("latency_us p50 "), std::string::npos) << said;
  EXPECT_NE(said.find("accepted 2940 late 0 unsound 60 lost 0 rejected_blocks 0 breaks 0"), std::string::npos)
      << "each event has two photons, one in 50 a NaN: " << said;
}

TEST_F(TriggerNode, LateEventsPassByThePolicy) {
  const std::vector<std::string> flags{
      "--gate", server_->address(), "--selection", "pairs",       "--events", folder_ / "e.kgb", "--rate",
      "3000",   "--seconds",        "1",           "--budget_ms", "1e-3"};
  EXPECT_NE(Node(flags, folder_).find("accepted 3000 late 3000"), std::string::npos);
}

TEST_F(TriggerNode, FromARing) {
  const std::string ring = "/kinegate-test3-" + std::to_string(::getpid());
  testing::Process feed;
  feed.Start({testing::Program("RING_FEED_PROGRAM"), "--ring", ring, "--events", folder_ / "e.kgb", "--rate",
              "3000", "--seconds", "1", "--join_ms", "1500"},
             folder_ / "feed");
  std::this_thread::sleep_for(std::chrono::milliseconds(700));
  const std::string said =
      Node({"--gate", server_->address(), "--selection", "pairs", "--ring", ring}, folder_);
  EXPECT_EQ(feed.Wait(), 0);
  EXPECT_NE(said.find("accepted 2940 late 0 unsound 60 lost 0"), std::string::npos) << said;
}

}  // namespace
}  // namespace kinegate::trigger
