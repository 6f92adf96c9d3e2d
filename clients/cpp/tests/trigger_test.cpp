// The parts of the example trigger node, and the node itself over a server.
#include <gtest/gtest.h>
#include <unistd.h>

#include <fstream>
#include <functional>
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
using testing::Full;
using testing::Sample;

// AddBlock writes a block behind its length.
void AddBlock(const v1::EventBlock& block, std::ofstream* file) {
  const std::string bytes = block.SerializeAsString();
  for (std::size_t length = bytes.size(); true; length >>= 7) {
    file->put(static_cast<char>(length < 128 ? length : (length & 127) | 128));
    if (length < 128) break;
  }
  *file << bytes;
}

// WriteBlocks writes events as a file of blocks of 30 events.
void WriteBlocks(const std::string& name, const EventArrays& arrays) {
  std::ofstream file(name, std::ios::binary);
  for (std::size_t first = 0; first < arrays.event_count(); first += 30) {
    AddBlock(MakeBlock(arrays, first, 30), &file);
  }
}

void WriteBlocks(const std::string& name, const Sample& sample) {
  WriteBlocks(name, sample.arrays());
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

TEST(BlockFile, KeepsEveryColumn) {
  const Folder folder;
  const Full full(90);
  WriteBlocks(folder / "e.kgb", full.arrays());
  const Events events = ReadBlockFile(folder / "e.kgb");
  const v1::EventBlock due = MakeBlock(full.arrays(), 40, 30);
  std::vector<const google::protobuf::FieldDescriptor*> fields;
  due.GetReflection()->ListFields(due, &fields);
  // All but the sequence, the other four sets of coordinates, and the weights of simulated events,
  // which have no say in a verdict.
  EXPECT_EQ(static_cast<int>(fields.size()), v1::EventBlock::descriptor()->field_count() - 6);
  const v1::EventBlock got = MakeBlock(events.arrays(), 40, 30);
  for (const auto* field : fields)
    EXPECT_TRUE(got.GetReflection()->HasField(got, field) || !field->message_type());
  EXPECT_EQ(got.SerializeAsString(), due.SerializeAsString());
}

TEST(BlockFile, BlocksOfAFileCarryTheSameColumns) {
  const Folder folder;
  const Full full(60);
  const struct {
    const char* text;
    std::function<void(v1::EventBlock*)> spoil;
  } cases[] = {
      {"block 2: covariance has ", [](v1::EventBlock* b) { b->clear_covariance(); }},
      {"block 2: vertex.x_m has ", [](v1::EventBlock* b) { b->clear_vertex(); }},
      {"block 2: vertex.covariance_m2 has ",
       [](v1::EventBlock* b) { b->mutable_vertex()->clear_covariance_m2(); }},
      {"block 2: vertex_group.offsets has ", [](v1::EventBlock* b) { b->clear_vertex_group(); }},
      {"block 2: cluster_position.x_m has ", [](v1::EventBlock* b) { b->clear_cluster_position(); }},
      {"block 2: polarisation.plane_rad has ",
       [](v1::EventBlock* b) { b->mutable_polarisation()->clear_plane_rad(); }},
      {"mixes runs 7 and 8", [](v1::EventBlock* b) { b->set_run_number(8); }},
  };
  for (const auto& c : cases) {
    v1::EventBlock second = MakeBlock(full.arrays(), 30, 30);
    c.spoil(&second);
    {
      std::ofstream file(folder / "e.kgb", std::ios::binary);
      AddBlock(MakeBlock(full.arrays(), 0, 30), &file);
      AddBlock(second, &file);
    }
    try {
      ReadBlockFile(folder / "e.kgb");
      ADD_FAILURE() << c.text;
    } catch (const Error& error) {
      EXPECT_NE(std::string(error.what()).find(c.text), std::string::npos) << error.what();
    }
  }
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

TEST(Ring, NamesColumnsThatItCannotCarry) {
  const Folder folder;
  WriteBlocks(folder / "full", Full(30).arrays());
  EXPECT_EQ(LeftOut(ReadBlockFile(folder / "full")),
            "species masks, covariances, vertices, vertex groups, cluster positions, polarisation");
  WriteBlocks(folder / "plain", Sample(30));
  EXPECT_EQ(LeftOut(ReadBlockFile(folder / "plain")), "");
}

TEST(Ring, CountsOfASlotAreNotBelieved) {
  const std::string name = "/kinegate-test5-" + std::to_string(::getpid());
  Ring writer = Ring::Create(name, 8);
  Slot slot{};
  slot.object_count = 20;
  slot.candidate_count = 1 << 30;
  writer.Write(slot);
  EXPECT_EQ(writer.left_out_count(), 4 + (1 << 30) - 16);
  slot.object_count = -1;
  slot.candidate_count = 0;
  writer.Write(slot);
  Events read;
  for (int i = 0; i < 2; ++i) {
    AppendSlot(*writer.Read(), &read);
    writer.Free();
  }
  EXPECT_EQ(read.offsets, (std::vector<std::int32_t>{0, 16, 16}));
  EXPECT_EQ(read.beam_offsets, (std::vector<std::int32_t>{0, 16, 16}));
}

TEST(Ring, CarriesEventsBetweenThreads) {
  const Folder folder;
  const Sample sample(90);
  WriteBlocks(folder / "e.kgb", sample);
  const Events events = ReadBlockFile(folder / "e.kgb");
  const std::string name = "/kinegate-test2-" + std::to_string(::getpid());
  Ring writer = Ring::Create(name, 64);
  const auto source = FromRing(name, std::chrono::seconds(60));
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

// Node runs the trigger node, which must end with a code, and returns what it prints.
std::string Node(const std::vector<std::string>& flags, const Folder& folder, int code = 0) {
  std::vector<std::string> command{testing::Program("TRIGGER_PROGRAM")};
  command.insert(command.end(), flags.begin(), flags.end());
  testing::Process process;
  process.Start(command, folder / "out");
  EXPECT_EQ(process.Wait(), code);
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

TEST_F(TriggerNode, AFitGetsTheCovariancesOfTheFile) {
  const std::string data = testing::Program("RPC_CASES") + "/..";
  server_ = std::make_unique<testing::Server>(
      "", std::vector<std::string>{"--selection-files", data + "/selections/two-pions.yaml"});
  const std::string said =
      Node({"--gate", server_->address(), "--selection", "two-pions", "--events",
            data + "/simulated/two-pions.kgb", "--rate", "60", "--seconds", "1", "--block", "20"},
           folder_);
  EXPECT_NE(said.find("rejected_blocks 0"), std::string::npos) << said;
  EXPECT_EQ(said.find("accepted 0 "), std::string::npos) << said;
}

TEST_F(TriggerNode, RejectedBlocksAreToldAndFail) {
  const std::string data = testing::Program("RPC_CASES") + "/..";
  server_ = std::make_unique<testing::Server>(
      "", std::vector<std::string>{"--selection-files", data + "/selections/two-pions.yaml"});
  const std::string said = Node({"--gate", server_->address(), "--selection", "two-pions", "--events",
                                 folder_ / "e.kgb", "--rate", "1000", "--seconds", "0.5"},
                                folder_, 1);
  EXPECT_NE(said.find("events 500 "), std::string::npos) << said;
  EXPECT_NE(said.find("first rejection: BLOCK_INVALID: "), std::string::npos) << said;
  EXPECT_NE(said.find("covariance"), std::string::npos) << said;
}

TEST_F(TriggerNode, FlagsOutOfRangeAreTold) {
  const struct {
    std::string flag, value, text;
  } cases[] = {
      {"block", "0.5", "--block 0.5 is no whole number from 1 to 4096"},
      {"block", "0", "--block 0 is no whole number from 1 to 4096"},
      {"block", "4097", "--block 4097 is no whole number from 1 to 4096"},
      {"block", "1.5", "--block 1.5 is no whole number from 1 to 4096"},
      {"gather_us", "0.1", "--gather_us 0.1 is no whole number"},
      {"seconds", "0", "--seconds 0 is no number above 0"},
      {"rate", "1e300", "--rate 1e300 is no number above 0 and at most"},
  };
  for (const auto& c : cases) {
    const Folder folder;
    const std::string said = Node({"--gate", server_->address(), "--selection", "pairs", "--events",
                                   folder_ / "e.kgb", "--" + c.flag, c.value},
                                  folder, 2);
    EXPECT_NE(said.find(c.text), std::string::npos) << said;
  }
}

TEST_F(TriggerNode, ADeadFeederIsLeft) {
  const std::string name = "/kinegate-test4-" + std::to_string(::getpid());
  const Ring ring = Ring::Create(name, 4);
  const std::string said =
      Node({"--gate", server_->address(), "--selection", "pairs", "--ring", name, "--silence_s", "0.5"},
           folder_, 1);
  EXPECT_NE(said.find("ring " + name + ": no event for 0.5 s"), std::string::npos) << said;
  EXPECT_NE(said.find("events 0 "), std::string::npos) << said;
}

}  // namespace
}  // namespace kinegate::trigger
