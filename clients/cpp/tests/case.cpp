#include "case.h"

#include <google/protobuf/util/json_util.h>

#include <cmath>
#include <filesystem>
#include <fstream>
#include <sstream>
#include <stdexcept>

#include "process.h"

namespace kinegate::testing {
namespace {

namespace json = google::protobuf::util;

void Must(const google::protobuf::util::Status& status) {
  if (!status.ok()) throw std::runtime_error(status.ToString());
}

std::string Text(const Json& value) {
  std::string text;
  Must(json::MessageToJsonString(value, &text));
  return text;
}

}  // namespace

std::string CaseFile(const std::string& name) {
  return Program("RPC_CASES") + "/" + name;
}

std::map<std::string, Json> ReadCases(const std::string& folder) {
  std::map<std::string, Json> cases;
  for (const auto& entry : std::filesystem::directory_iterator(CaseFile(folder))) {
    if (entry.path().extension() != ".json") continue;
    std::ifstream file(entry.path());
    std::ostringstream text;
    text << file.rdbuf();
    Must(json::JsonStringToMessage(text.str(), &cases[entry.path().stem()]));
  }
  if (cases.empty()) throw std::runtime_error(folder + " holds no cases");
  return cases;
}

const Json& Member(const Json& object, const std::string& name) {
  static const Json null = [] {
    Json value;
    value.set_null_value(google::protobuf::NULL_VALUE);
    return value;
  }();
  const auto& fields = object.struct_value().fields();
  const auto found = fields.find(name);
  return found == fields.end() ? null : found->second;
}

void Fill(const Json& form, google::protobuf::Message* message) {
  Must(json::JsonStringToMessage(Text(form), message));
}

Json Form(const google::protobuf::Message& message) {
  json::JsonPrintOptions options;
  options.preserve_proto_field_names = true;
  options.always_print_primitive_fields = true;
  std::string text;
  Must(json::MessageToJsonString(message, &text, options));
  Json form;
  Must(json::JsonStringToMessage(text, &form));
  return form;
}

std::string Differ(const std::string& path, const Json& due, const Json& came, double tolerance) {
  const std::string differ = path + " is " + Text(came) + " where " + Text(due) + " is due";
  if (due.kind_case() != came.kind_case()) return differ;
  switch (due.kind_case()) {
    case Json::kStructValue:
      for (const auto& [name, value] : due.struct_value().fields()) {
        std::string found = Differ(path + "." + name, value, Member(came, name), tolerance);
        if (!found.empty()) return found;
      }
      return "";
    case Json::kListValue: {
      const auto& d = due.list_value().values();
      const auto& c = came.list_value().values();
      if (d.size() != c.size()) return differ;
      for (int i = 0; i < d.size(); ++i) {
        std::string found = Differ(path + "[" + std::to_string(i) + "]", d[i], c[i], tolerance);
        if (!found.empty()) return found;
      }
      return "";
    }
    case Json::kNumberValue:
      return std::abs(came.number_value() - due.number_value()) <= tolerance * std::abs(due.number_value())
                 ? ""
                 : differ;
    case Json::kStringValue:
      return due.string_value() == came.string_value() ? "" : differ;
    case Json::kBoolValue:
      return due.bool_value() == came.bool_value() ? "" : differ;
    default:
      return "";
  }
}

}  // namespace kinegate::testing
